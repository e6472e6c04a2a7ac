import { earliestPossible } from './bound.ts'
import { type DayTables, pieceS, rowAt } from './day-tables.ts'

const BISECTIONS = 50
/** A limit that lies farther below, as a share of the day's time, is looked for at other prices too. */
const FAR = 0.008
const FACTORS = [1.25, 0.8]
const MOST_TRIES = 4

/**
 * A proven lower limit on the arrival at the last place of a day, stops that are held there left out.
 *
 * The tables end when those stops are over, the plan when the car arrives: the limit is the first arrival from which
 * they are not over before the tables' own limit.
 *
 * @param sPerJ     price of energy on leaving each edge. [s/J] (pieces + 1)
 * @param arrivalS  arrival of a drive that holds. [S]
 * @param stepS     width of a cell. [S]
 * @param alongS    when that drive leaves each edge, to lay the cells around; left out, they are even. [S] (pieces + 1)
 * @returns not above `arrivalS` [S]
 */
export function earliestArrival(
  day: DayTables,
  sPerJ: Float64Array,
  arrivalS: number,
  stepS: number,
  alongS?: Float64Array,
): number {
  const over = (atS: number): number =>
    day.stops.reduce((s, stop) => (stop.beforePiece === day.pieces ? s + rowAt(stop.lengthS, 0, day.clock, s) : s), atS)
  const overS = over(arrivalS)
  const limit = (prices: Float64Array): number => earliestPossible(day, prices, overS, stepS, alongS)
  const earliestS = tightestLimit(limit, sPerJ, FAR * (overS - day.start.atS), overS)
  const byRoadS = Math.min(shortestS(day), arrivalS)
  if (overS === arrivalS) return Math.max(earliestS, byRoadS)
  let low = Math.min(day.start.atS, arrivalS)
  let high = arrivalS
  for (let n = 0; n < BISECTIONS && high - low > 1e-6; n++) {
    const middle = (low + high) / 2
    if (over(middle) < earliestS) low = middle
    else high = middle
  }
  return Math.max(low, byRoadS)
}

/** Arrival if all is driven as fast as is allowed, with the stops before the end at their shortest. [S] */
function shortestS(day: DayTables): number {
  const driven = day.fastestMps.reduce((s, v, i) => s + pieceS(day, i, v), day.start.atS)
  const before = day.stops.filter(({ beforePiece }) => beforePiece < day.pieces)
  return before.reduce((s, { lengthS }) => s + lengthS.reduce((a, b) => Math.min(a, b)), driven)
}

/**
 * The limit at the prices given or, where that is far below, at all of them dearer or cheaper: the prices of a drive are
 * right for small changes, and the limit may want others where the frontier is not concave. Over a common factor the
 * limit has one summit, and each is valid.
 */
function tightestLimit(
  limit: (sPerJ: Float64Array) => number,
  sPerJ: Float64Array,
  farS: number,
  overS: number,
): number {
  const atPrices = limit(sPerJ)
  let best = atPrices
  for (const way of FACTORS) {
    if (best > atPrices) break
    let factor = way
    for (let n = 0; n < MOST_TRIES && overS - best > farS; n++, factor *= way) {
      const tried = limit(sPerJ.map((price) => price * factor))
      if (!(tried > best)) break
      best = tried
    }
  }
  return best
}
