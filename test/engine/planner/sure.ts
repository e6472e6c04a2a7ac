import type { Spreads } from '../../../server/engine/ensemble/spread.ts'

/** A day of which everything is known. */
export const SURE: Spreads = {
  sunDay: 0,
  sunWander: 0,
  wanderS: 5400,
  wanderM: 150_000,
  headwindMps: 0,
  roadLoad: 0,
  trackers: 0,
  openingJ: 0,
}
