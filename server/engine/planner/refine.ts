import { type DayTables, type Load, loadAt, pieceMps, pieceS } from './day-tables.ts'
import { descend } from './descent.ts'
import { lagrangian, MOST_S_PER_J, newSweep, raisePrices } from './lagrangian.ts'
import { type Drive, simulate, type Track } from './simulate.ts'

export interface Refined {
  drive: Drive
  track: Track
  /** What a joule more on leaving each edge saves. [s/J] (pieces + 1) */
  sPerJ: Float64Array
  /** Prices that floor and target ended with, to go on from. [s/J] (pieces + 2) */
  multiplier: Float64Array
}

const ROUNDS = 10
const STEPS = 60
/** A drive is left when no step promises more. [S] */
const CLOSE_S = 1e-4
/** How close to floor and target a drive is brought. [J] */
const SPARE_J = 36
/** A price to start from: 2bv³ at 80 km/h of a light car. [s/J] */
const FIRST_PRICE = 1 / 1300
/** A lack of 30 Wh doubles that price. */
const FIRST_STIFFNESS = FIRST_PRICE / 108_000

/**
 * Speeds made better piece by piece: the earliest arrival with the floor kept everywhere and the target met.
 *
 * Augmented Lagrangian over the times of the pieces, its slope by an exact backward sweep; waits stay as they are.
 * The drive given back is the fastest met on the way that holds, else the one that lacks least.
 *
 * @param start       a drive within the pieces' limits; it need not hold
 * @param multiplier  prices of an earlier refinement of nearly the same day, to start from
 * @source Nocedal & Wright, Numerical Optimization, 2nd ed., §17.3–17.4 (from memory)
 */
export function refine(day: DayTables, start: Drive, multiplier?: Float64Array): Refined {
  const { fastestMps, slowestMps } = day
  const low = fastestMps.map((v, i) => pieceS(day, i, v))
  const high = fastestMps.map((v, i) => pieceS(day, i, Math.min(slowestMps, v)))
  const timeS = start.speedMps.map((v, i) => Math.min(Math.max(pieceS(day, i, v), low[i]), high[i]))
  const sweep = newSweep(day, start.waitS)
  sweep.multiplier[day.pieces + 1] = FIRST_PRICE
  if (multiplier !== undefined) sweep.multiplier.set(multiplier)
  const least = multiplier === undefined ? 3 : 1
  sweep.stiffness = FIRST_STIFFNESS
  sweep.spareJ = SPARE_J
  let best = held(day, timeS, start.waitS)
  let lastLackJ = Number.POSITIVE_INFINITY
  for (let round = 0; round < ROUNDS; round++) {
    const box = { low, high, scale: curvature(day, timeS, sweep.multiplier[day.pieces + 1]) }
    descend((x, slope) => lagrangian(day, sweep, x, slope), timeS, box, STEPS, CLOSE_S)
    lagrangian(day, sweep, timeS, new Float64Array(day.pieces))
    const now = held(day, timeS, start.waitS)
    if (isBetter(now.track, best.track)) best = now
    raisePrices(day, sweep)
    const lackJ = Math.max(now.track.shortJ + SPARE_J, 0)
    if (lackJ > 0.25 * lastLackJ) sweep.stiffness *= 4
    lastLackJ = lackJ
    if (round >= least && Math.abs(now.track.shortJ + SPARE_J) < SPARE_J) break
  }
  return { ...best, sPerJ: sweep.price.map((s) => Math.min(s, MOST_S_PER_J)), multiplier: sweep.multiplier.slice() }
}

function held(day: DayTables, timeS: Float64Array, waitS: Float64Array): { drive: Drive; track: Track } {
  const drive = { speedMps: timeS.map((s, i) => pieceMps(day, i, s)), waitS }
  return { drive, track: simulate(day, drive) }
}

/** A drive that holds before one that does not; then the earlier, else the one that lacks less. */
export function isBetter(one: Track, other: Track): boolean {
  const holds = (track: Track): boolean => track.shortJ <= 0 && track.lateS <= 0
  if (holds(one) !== holds(other)) return holds(one)
  return holds(one) ? one.atS[one.atS.length - 1] < other.atS[other.atS.length - 1] : one.shortJ < other.shortJ
}

/** Curvature of priced energy over each piece's time: P″·v³ over length, times the price. [1/s] */
function curvature(day: DayTables, timeS: Float64Array, price: number): Float64Array {
  const load: Load = { W: 0, slope: 0 }
  return timeS.map((s, i) => {
    const v = pieceMps(day, i, s)
    const bend = (loadAt(day, i, v * 1.03, load).slope - loadAt(day, i, v * 0.97, load).slope) / (0.06 * v)
    return Math.max(price, FIRST_PRICE / 10) * Math.max(bend, 1) * (v ** 3 / day.lengthM[i])
  })
}
