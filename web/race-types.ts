import type { RacePlanDocument } from '../server/documents/race-plan.ts'
import type { RacePlanGist } from '../server/documents/race-plan-gist.ts'
import type { PlanEntry } from './plan-types.ts'

export type { RacePlanDay, RacePlanDocument } from '../server/documents/race-plan.ts'

/** A closing charge in place of the race's. */
export type NightOrder = { date: string; kind: 'fixed'; chargePct: number } | { date: string; kind: 'free' }

/** What a race plan was asked to keep. */
export interface RaceWanted {
  fromDate?: string
  toDate?: string
  /** Charge when the first planned day opens. [% of charge] */
  openingPct?: number
  nights: NightOrder[]
  from?: object
}

/** A race plan without its body. */
export interface RacePlanEntry extends Omit<PlanEntry, 'wanted' | 'gist'> {
  wanted: RaceWanted
  gist: RacePlanGist | null
}

export interface RacePlanAnswer extends RacePlanEntry {
  plan: RacePlanDocument | null
}
