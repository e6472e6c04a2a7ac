import {
  changeSlope,
  type DayTables,
  type Load,
  loadAt,
  pieceMps,
  rowAt,
  rowSlopeAt,
  standsAt,
  storedSlope,
  storedW,
  waitedJ,
  waitedSlope,
} from './day-tables.ts'
import { motionJ } from './simulate.ts'

/** Multipliers of what must hold, and the last drive's course; everything that the sweeps write. */
export interface Sweep {
  /** Waiting at each edge, fixed. [S] (pieces + 1) */
  waitS: Float64Array
  /** Prices of the floor at each edge (0 is unused) and, last, of the target. [s/J] (pieces + 2) */
  multiplier: Float64Array
  /** How fast a lack grows dearer. [s/J²] */
  stiffness: number
  /** How much more than floor and target is aimed at. [J] */
  spareJ: number
  /** Instant of leaving each edge. [S] (pieces + 1) */
  atS: Float64Array
  speedMps: Float64Array
  /** Net power at the pack on each piece, how the sun changes over time there, and the load over speed. [W, W/s, J/m] */
  netW: Float64Array
  sunSlope: Float64Array
  loadSlope: Float64Array
  /** Energy on arrival at each edge. [J] (pieces + 1) */
  arrivalJ: Float64Array
  /** Energy when the day closes. [J] */
  duskJ: number
  /** What a joule more on leaving each edge saves. [s/J] (pieces + 1) */
  price: Float64Array
  arrivedS: Float64Array
  isFull: { piece: Uint8Array; wait: Uint8Array; stop: Uint8Array }
}

export const newSweep = (day: DayTables, waitS: Float64Array): Sweep => ({
  waitS,
  multiplier: new Float64Array(day.pieces + 2),
  stiffness: 0,
  spareJ: 0,
  atS: new Float64Array(day.pieces + 1),
  speedMps: new Float64Array(day.pieces),
  netW: new Float64Array(day.pieces),
  sunSlope: new Float64Array(day.pieces),
  loadSlope: new Float64Array(day.pieces),
  arrivalJ: new Float64Array(day.pieces + 1),
  duskJ: 0,
  price: new Float64Array(day.pieces + 1),
  arrivedS: new Float64Array(day.stops.length),
  isFull: {
    piece: new Uint8Array(day.pieces),
    wait: new Uint8Array(day.pieces + 1),
    stop: new Uint8Array(day.stops.length),
  },
})

const load: Load = { W: 0, slope: 0 }

function forward(day: DayTables, sweep: Sweep, timeS: Float64Array): void {
  const { pieces, pack, clock, stops, kinetic } = day
  const { isFull, waitS } = sweep
  for (let i = 0; i < pieces; i++) sweep.speedMps[i] = pieceMps(day, i, timeS[i])
  let t = day.start.atS
  let E = day.start.energyJ
  let s = 0
  for (let i = 0; i <= pieces; i++) {
    sweep.arrivalJ[i] = E
    for (; s < stops.length && stops[s].beforePiece === i; s++) {
      sweep.arrivedS[s] = t
      E += rowAt(stops[s].gainJ, 0, clock, t)
      isFull.stop[s] = E >= pack.ceilingJ ? 1 : 0
      if (E > pack.ceilingJ) E = pack.ceilingJ
      t += rowAt(stops[s].lengthS, 0, clock, t)
    }
    if (waitS[i] > 0) {
      E += waitedJ(day, i, t, waitS[i])
      isFull.wait[i] = E >= pack.ceilingJ ? 1 : 0
      if (E > pack.ceilingJ) E = pack.ceilingJ
      t += waitS[i]
    }
    sweep.atS[i] = t
    if (i === pieces) break
    const middleS = t + timeS[i] / 2
    loadAt(day, i, sweep.speedMps[i], load)
    const netW = rowAt(day.harvestW, i * clock.count, clock, middleS) - load.W
    sweep.netW[i] = netW
    sweep.sunSlope[i] = rowSlopeAt(day.harvestW, i * clock.count, clock, middleS)
    sweep.loadSlope[i] = load.slope
    E += storedW(pack, netW) * timeS[i] - day.extraJ[i]
    if (kinetic.massKg > 0) E -= motionJ(day, sweep.speedMps, i)
    isFull.piece[i] = E >= pack.ceilingJ ? 1 : 0
    if (E > pack.ceilingJ) E = pack.ceilingJ
    t += timeS[i]
  }
  sweep.duskJ = E + rowAt(day.duskGainJ, 0, clock, t)
}

/** What a lack costs beyond its price: quadratic once it is dearer than nothing. [s] */
function lackS(lackJ: number, price: number, stiffness: number): number {
  const at = Math.max(price + stiffness * lackJ, 0)
  return (at * at - price * price) / (2 * stiffness)
}

/**
 * Arrival at the end plus what lacks of floor and target cost, for the times that the pieces take.
 *
 * @param timeS  time of each piece. [S] (pieces)
 * @param slope  its exact slope, by one sweep from the end back; overwritten (pieces)
 * @returns [s]
 */
export function lagrangian(day: DayTables, sweep: Sweep, timeS: Float64Array, slope: Float64Array): number {
  forward(day, sweep, timeS)
  slope.fill(0)
  const { pieces: n, pack, clock, stops } = day
  const { atS, isFull, multiplier, stiffness, spareJ, price, waitS } = sweep
  const isFullAtDusk = sweep.duskJ >= pack.ceilingJ
  const duskLackJ = day.targetJ + spareJ - Math.min(sweep.duskJ, pack.ceilingJ)
  let value = atS[n] + lackS(duskLackJ, multiplier[n + 1], stiffness)
  let p = isFullAtDusk ? 0 : -Math.max(multiplier[n + 1] + stiffness * duskLackJ, 0)
  let q = 1 + p * rowSlopeAt(day.duskGainJ, 0, clock, atS[n])
  let s = stops.length - 1
  for (let i = n; i >= 0; i--) {
    if (i < n) {
      const speedMps = sweep.speedMps[i]
      const netW = sweep.netW[i]
      const sunSlope = sweep.sunSlope[i]
      if (isFull.piece[i] === 1) p = 0
      const worth = p * storedSlope(pack, netW)
      slope[i] +=
        q +
        p * storedW(pack, netW) +
        worth * timeS[i] * (0.5 * sunSlope + (sweep.loadSlope[i] * speedMps * speedMps) / day.lengthM[i])
      q += worth * sunSlope * timeS[i]
      if (day.kinetic.massKg > 0) addMotion(day, sweep, slope, i, p)
    }
    price[i] = -p
    if (waitS[i] > 0) {
      if (isFull.wait[i] === 1) p = 0
      q += p * waitedSlope(day, i, atS[i] - waitS[i], waitS[i])
    }
    for (; s >= 0 && stops[s].beforePiece === i; s--) {
      if (isFull.stop[s] === 1) p = 0
      const t = sweep.arrivedS[s]
      q = q * (1 + rowSlopeAt(stops[s].lengthS, 0, clock, t)) + p * rowSlopeAt(stops[s].gainJ, 0, clock, t)
    }
    if (i === 0) break
    const lackJ = day.floorJ[i] + spareJ - sweep.arrivalJ[i]
    value += lackS(lackJ, multiplier[i], stiffness)
    p -= Math.max(multiplier[i] + stiffness * lackJ, 0)
  }
  return value
}

/** Slopes of the changes of speed that a piece brings, over its own time and that of the piece before. */
function addMotion(day: DayTables, { speedMps }: Sweep, slope: Float64Array, i: number, p: number): void {
  const { kinetic, lengthM } = day
  const v = speedMps[i]
  const before = standsAt(day, i) ? 0 : speedMps[i - 1]
  const gained = changeSlope(kinetic, before, v)
  const lost = standsAt(day, i + 1) ? changeSlope(kinetic, v, 0) : 0
  // Over its time a piece's motion falls by m·v·v²/length.
  slope[i] += (p * (gained - lost) * kinetic.massKg * v * v * v) / lengthM[i]
  if (before > 0) slope[i - 1] -= (p * gained * kinetic.massKg * before * before * before) / lengthM[i - 1]
}

/** No price is taken for more: it is 1/(2bv³ + S), and even a light car at 25 km/h without sun has 40 W there. [s/J] */
export const MOST_S_PER_J = 0.1

/** Brings every price to what its lack asked for. */
export function raisePrices(day: DayTables, sweep: Sweep): void {
  const { multiplier, stiffness, spareJ, arrivalJ } = sweep
  const { ceilingJ } = day.pack
  for (let i = 1; i <= day.pieces; i++)
    multiplier[i] = priceWithin(multiplier[i] + stiffness * (day.floorJ[i] + spareJ - arrivalJ[i]))
  const lackJ = day.targetJ + spareJ - Math.min(sweep.duskJ, ceilingJ)
  multiplier[day.pieces + 1] = priceWithin(multiplier[day.pieces + 1] + stiffness * lackJ)
}

const priceWithin = (sPerJ: number): number => Math.min(Math.max(sPerJ, 0), MOST_S_PER_J)
