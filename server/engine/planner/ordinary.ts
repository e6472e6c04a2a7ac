import type { Race } from '../forecast.ts'
import type { Reach } from './engine-tables.ts'

/** Speed of a forecast before anything is planned, and of pieces that a day does not reach. [Mps] */
export const ORDINARY_MPS = 70 / 3.6

/** That speed everywhere. [Mps] (pieces of the course) */
export const ordinarySpeeds = ({ course }: Race): Float64Array =>
  new Float64Array(course.pieces.count).fill(ORDINARY_MPS)

/**
 * A day's speeds on the course, with that speed before and behind them.
 *
 * @param speedMps  [Mps] (pieces of the day)
 * @returns [Mps] (pieces of the course)
 */
export function onCourse(race: Race, reach: Reach, speedMps: Float64Array): Float64Array {
  const all = ordinarySpeeds(race)
  all.set(speedMps, reach.first)
  return all
}
