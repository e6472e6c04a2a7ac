import { fallsOf, loadsOf } from './bound-hollow.ts'
import {
  type DayTables,
  type Load,
  loadAt,
  lopsidedJ,
  lopsidedSlope,
  pieceMps,
  pieceS,
  standsAt,
  storedSlope,
  storedW,
} from './day-tables.ts'

/** A piece's priced energy over the time it takes, made ready for tangents. */
export interface Priced {
  day: DayTables
  piece: number
  price: number
  shortestS: number
  longestS: number
  /** Speeds of the table from fast to slow, and the slope of load energy over time there. [s/m … W] */
  timeS: Float64Array
  slopeW: Float64Array
  /** About the time that suits the slope of each cell before the piece. [S] (cells) */
  guessS: Float64Array
  /** By how much the slope of its energy over time falls between two of these times; empty where it is convex. [W] */
  fallW: Float64Array
  /** By how much in all. [W] */
  fallsW: number
  /** Most and least that the load can be. [W] */
  mostLoadW: number
  leastLoadW: number
  /** How many of its two ends the car stands at. */
  stands: number
}

/** Lays out a piece whose energy costs so much. [s/J] */
export function pricedOf(day: DayTables, piece: number, price: number): Priced {
  const { speeds, fastestMps, slowestMps } = day
  const fastest = fastestMps[piece]
  const slowest = Math.min(slowestMps, fastest)
  // At least two entries: a piece may be too steep for the slowest of the table.
  const first = Math.min(Math.max(Math.floor((slowest - speeds.from) / speeds.step), 0), speeds.count - 2)
  const last = Math.min(Math.max(Math.ceil((fastest - speeds.from) / speeds.step), first + 1), speeds.count - 1)
  const timeS = new Float64Array(last - first + 1)
  const slopeW = new Float64Array(last - first + 1)
  for (let j = last; j >= first; j--) {
    const speedMps = speeds.from + j * speeds.step
    loadAt(day, piece, speedMps, load)
    timeS[last - j] = pieceS(day, piece, speedMps)
    slopeW[last - j] = load.W - fallW(day, piece, speedMps, timeS[last - j])
  }
  const falls = fallsOf(day, piece, first, last)
  return {
    day,
    piece,
    price,
    shortestS: pieceS(day, piece, fastest),
    longestS: pieceS(day, piece, slowest),
    timeS,
    slopeW,
    guessS: new Float64Array(0),
    fallW: falls,
    fallsW: falls.reduce((sum, W) => sum + W, 0),
    ...loadsOf(day, piece),
    stands: day.kinetic.massKg > 0 ? (standsAt(day, piece) ? 1 : 0) + (standsAt(day, piece + 1) ? 1 : 0) : 0,
  }
}

const load: Load = { W: 0, slope: 0 }
/** Filled by `tangentAt`. */
export const tangent = { value: 0, slope: 0, keptS: 0 }

/** Priced energy of a piece driven in a time, its slope over that time, and what a watt more would store. [s, 1, S] */
export function tangentAt({ day, piece, price, stands }: Priced, timeS: number, sunW: number): void {
  const speedMps = pieceMps(day, piece, timeS)
  loadAt(day, piece, speedMps, load)
  const stored = storedW(day.pack, sunW - load.W)
  const kept = storedSlope(day.pack, sunW - load.W)
  tangent.value = -price * stored * timeS
  tangent.slope = -price * (stored + kept * fallW(day, piece, speedMps, timeS))
  tangent.keptS = kept * timeS
  if (stands > 0) addRest(day, piece, speedMps, price * stands)
}

/** From rest or to rest: what the change of speed costs beyond the middle of gains and losses, convex over the time. */
function addRest({ kinetic, lengthM }: DayTables, piece: number, speedMps: number, price: number): void {
  const { massKg } = kinetic
  tangent.value += price * lopsidedJ(kinetic, speedMps)
  const perMotion = lopsidedSlope(kinetic, speedMps)
  tangent.slope -= (price * perMotion * massKg * speedMps * speedMps * speedMps) / lengthM[piece]
}

/** Fall of the last load over the piece's time, times that time. [W] */
const fallW = (day: DayTables, piece: number, speedMps: number, timeS: number): number =>
  (load.slope * speedMps * speedMps * timeS) / day.lengthM[piece]

/**
 * Most by which priced energy can lie below its tangent between two times: each fall of its slope counts from where it
 * is nearest to the tangent's point. 0 where energy is convex.
 */
export function hollowBetween(priced: Priced, atS: number, leastS: number, mostS: number, sunW: number): number {
  const { timeS, fallW, day, price, mostLoadW } = priced
  if (fallW.length === 0) return 0
  let before = 0
  let behind = 0
  for (let k = 0; k < fallW.length; k++) {
    if (fallW[k] === 0) continue
    if (timeS[k] < atS) before += fallW[k] * Math.max(Math.min(timeS[k + 1], atS) - leastS, 0)
    if (timeS[k + 1] > atS) behind += fallW[k] * Math.max(mostS - Math.max(timeS[k], atS), 0)
  }
  return price * Math.max(before, behind) * storedSlope(day.pack, Math.min(sunW, 0) - mostLoadW)
}

/**
 * Time at which priced energy grows as fast as wanted: from the table, then bettered by Newton's steps. Any tangent
 * holds, a better one holds tighter. [S]
 */
export function timeOfSlope(priced: Priced, grows: number, sunW: number, steps: number): number {
  const { timeS, slopeW, price, shortestS, longestS } = priced
  if (!(price > 0)) return shortestS
  const wantedW = grows / price + sunW
  const last = timeS.length - 1
  let low = 0
  let high = last
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if (slopeW[middle] < wantedW) low = middle
    else high = middle
  }
  const bendW = (slopeW[high] - slopeW[low]) / (timeS[high] - timeS[low])
  const within = (s: number): number => Math.min(Math.max(s, shortestS), longestS)
  if (!(bendW > 0)) return within(timeS[low])
  let at = timeS[low] + (wantedW - slopeW[low]) / bendW
  for (let step = 0; step < steps; step++) {
    at = within(at)
    tangentAt(priced, at, sunW)
    at += (grows - tangent.slope) / (price * bendW)
  }
  return within(at)
}
