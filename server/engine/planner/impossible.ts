import { earliestEnd } from './back-track.ts'
import { type DayTables, rowAt } from './day-tables.ts'
import { type Frontier, frontier } from './frontier.ts'

/** Why no drive holds, by how much, and the nearest that would. All by the tables. */
export interface Impossible {
  /** The first of these that cannot be kept: the hours, the reserve, the target. */
  why: 'hours' | 'reserve' | 'target'
  /** Edge beyond which the car does not come in time with the reserve; the end's where it comes there. */
  farthestEdge: number
  /** Most energy with which the day can close; NaN where the end is not reached. [J] */
  mostAtCloseJ: number
  /** Floor with which it would hold, if a lower one helps; NaN else. [J] */
  floorJ: number
  /** How much later the end of the hours would have to be, if up to two hours help; NaN else. [S] */
  laterS: number
}

const BIN_S = 120
const SPEED_STEP_MPS = 6 / 3.6
const MOST_LATER_S = 7200
const HALVINGS = 6

const ends = (day: DayTables): { found: Frontier; endS: number } => {
  // Bins from which the end cannot be reached in time count too: how far the car comes is asked.
  const found = frontier(day, BIN_S, SPEED_STEP_MPS, Number.POSITIVE_INFINITY)
  return { found, endS: earliestEnd(day, found) }
}
const isFinite = (s: number): boolean => s < Number.POSITIVE_INFINITY
const withFloor = (day: DayTables, J: number): DayTables => ({
  ...day,
  floorJ: new Float64Array(day.pieces + 1).fill(J),
})

/**
 * What stands in the way of a day that no drive through its tables can keep.
 *
 * Asks the frontier again with one want less at a time: target, reserve, hours.
 */
export function whyImpossible(day: DayTables): Impossible {
  const wishless = { ...day, targetJ: Number.NEGATIVE_INFINITY }
  const { found, endS } = ends(wishless)
  const why = isFinite(endS) ? 'target' : isFinite(ends(withFloor(wishless, 0)).endS) ? 'reserve' : 'hours'
  return {
    why,
    farthestEdge: isFinite(endS) ? day.pieces : farthestEdge(found),
    mostAtCloseJ: isFinite(endS) ? mostAtClose(day, found) : Number.NaN,
    floorJ: highestFloor(day),
    laterS: laterBy(day),
  }
}

/** The last edge that any bin of the frontier reaches. */
export function farthestEdge({ legs, knotS }: Frontier): number {
  let edge = 0
  legs.forEach(({ piece, stop }, layer) => {
    if (stop < 0 && knotS[layer + 1] < Number.POSITIVE_INFINITY) edge = piece + 1
  })
  return edge
}

function mostAtClose(day: DayTables, { legs, bins, mostJ, fromS, stepS }: Frontier): number {
  let most = Number.NEGATIVE_INFINITY
  for (let k = 0; k < bins; k++) {
    const J = mostJ[legs.length * bins + k]
    const atS = fromS + k * stepS
    if (J === Number.NEGATIVE_INFINITY || atS > day.latestS) continue
    most = Math.max(most, Math.min(day.pack.ceilingJ, J + rowAt(day.duskGainJ, 0, day.clock, atS)))
  }
  return most
}

/** The highest even floor below the wanted one with which the day holds. [J] */
function highestFloor(day: DayTables): number {
  if (!isFinite(ends(withFloor(day, 0)).endS)) return Number.NaN
  let low = 0
  let high = day.floorJ[day.pieces]
  for (let n = 0; n < HALVINGS; n++) {
    const middle = (low + high) / 2
    if (isFinite(ends(withFloor(day, middle)).endS)) low = middle
    else high = middle
  }
  return low
}

function laterBy(day: DayTables): number {
  const { endS } = ends({ ...day, latestS: day.latestS + MOST_LATER_S })
  return isFinite(endS) ? Math.max(endS - day.latestS, 0) : Number.NaN
}
