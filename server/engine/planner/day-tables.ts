/** Even steps of a table: entry k stands for `from + k·step`. */
export interface Axis {
  from: number
  step: number
  count: number
}

/** A timed stop in front of a piece. */
export interface TableStop {
  /** The stop is reached when the pieces before this one are driven. */
  beforePiece: number
  /** From arrival to departure, by instant of arrival. [S] (clock) */
  lengthS: Float64Array
  /** What the pack gains over the stop, by instant of arrival, before its ceiling. [J] (clock) */
  gainJ: Float64Array
  /** Arrivals after this are too late; Infinity where there is no such rule. [S] */
  closesS: number
}

/** What changes of speed cost. */
export interface Kinetic {
  /** Mass with what turns; 0 where changes of speed are free. [kg] */
  massKg: number
  /** Energy from the bus for each joule of motion gained, and back to it for each joule lost. */
  perGained: number
  perLost: number
}

/** What the pack holds and loses. */
export interface TablePack {
  /** Energy that it can hold. [J] */
  ceilingJ: number
  /** Resistance over voltage squared: power `n` at the terminals loses `n²` times this. [1/W] */
  lossPerW: number
  /** Share of what flows in that stays. */
  coulombic: number
}

/**
 * One day's drive as the planner sees it: what each piece of road costs at each speed, and what the sun
 * brings there at each time. Times are seconds on one clock, energies joules stored in the pack.
 */
export interface DayTables {
  pieces: number
  lengthM: Float64Array
  /** Time that a piece takes on top of its length at the speed: halts, speeding up, slowing down. [S] (pieces) */
  extraS: Float64Array
  /** What a piece takes from the pack on top of its load: changes of speed, halts. [J] (pieces) */
  extraJ: Float64Array
  /** Highest speed allowed and held by the motor. [Mps] (pieces) */
  fastestMps: Float64Array
  slowestMps: number
  speeds: Axis
  /** Power drawn from the bus, auxiliaries included. [W] (pieces × speeds) */
  loadW: Float64Array
  clock: Axis
  /** Power that the trackers give to the bus. [W] (pieces × clock) */
  harvestW: Float64Array
  /** Drawn while the car waits on the road. [W] */
  waitingLoadW: number
  kinetic: Kinetic
  stops: TableStop[]
  /** What the pack gains from an arrival at the end until dusk, before its ceiling. [J] (clock) */
  duskGainJ: Float64Array
  pack: TablePack
  /** Energy that must be left on arrival at each edge; the first is not asked. [J] (pieces + 1) */
  floorJ: Float64Array
  start: { atS: number; energyJ: number }
  /** Latest arrival at the end. [S] */
  latestS: number
  /** Wanted when the day closes, what the evening brings included. [J] */
  targetJ: number
}

/** Rate at which a net power at the terminals is stored: losses off, either sign. [W] */
export const storedW = (pack: TablePack, netW: number): number =>
  (netW > 0 ? netW * pack.coulombic : netW) - netW * netW * pack.lossPerW

/** Slope of `storedW`. */
export const storedSlope = (pack: TablePack, netW: number): number =>
  (netW > 0 ? pack.coulombic : 1) - 2 * netW * pack.lossPerW

/** A wait is reckoned in parts no longer than this, each in the sun of its middle. [S] */
export const WAIT_PART_S = 60

/** Energy that waiting at an edge stores, before the ceiling. [J] */
export function waitedJ(day: DayTables, edge: number, fromS: number, lengthS: number): number {
  const row = Math.min(edge, day.pieces - 1) * day.clock.count
  const parts = Math.ceil(lengthS / WAIT_PART_S)
  let W = 0
  for (let k = 0; k < parts; k++) {
    const sunW = rowAt(day.harvestW, row, day.clock, fromS + ((k + 0.5) * lengthS) / parts)
    W += storedW(day.pack, sunW - day.waitingLoadW)
  }
  return (W * lengthS) / parts
}

/** Slope of `waitedJ` over the instant at which the wait begins. [W] */
export function waitedSlope(day: DayTables, edge: number, fromS: number, lengthS: number): number {
  const row = Math.min(edge, day.pieces - 1) * day.clock.count
  const parts = Math.ceil(lengthS / WAIT_PART_S)
  let slope = 0
  for (let k = 0; k < parts; k++) {
    const middleS = fromS + ((k + 0.5) * lengthS) / parts
    const netW = rowAt(day.harvestW, row, day.clock, middleS) - day.waitingLoadW
    slope += storedSlope(day.pack, netW) * rowSlopeAt(day.harvestW, row, day.clock, middleS)
  }
  return (slope * lengthS) / parts
}

/** Value of a row at a place on its axis, straight between entries, held beyond the ends. */
export function rowAt(row: Float64Array, first: number, axis: Axis, at: number): number {
  const x = (at - axis.from) / axis.step
  if (!(x > 0)) return row[first]
  const last = axis.count - 1
  if (x >= last) return row[first + last]
  const i = x | 0
  return row[first + i] + (row[first + i + 1] - row[first + i]) * (x - i)
}

/** Slope of `rowAt` over its axis; 0 beyond the ends. */
export function rowSlopeAt(row: Float64Array, first: number, axis: Axis, at: number): number {
  const x = (at - axis.from) / axis.step
  if (!(x > 0) || x >= axis.count - 1) return 0
  const i = x | 0
  return (row[first + i + 1] - row[first + i]) / axis.step
}

/** Time that a piece takes at a speed. [S] */
export const pieceS = (day: DayTables, piece: number, speedMps: number): number =>
  day.lengthM[piece] / speedMps + day.extraS[piece]

/** Speed at which a piece takes a time. [Mps] */
export const pieceMps = (day: DayTables, piece: number, timeS: number): number =>
  day.lengthM[piece] / (timeS - day.extraS[piece])

/** Change of motion over which a gain passes smoothly into a loss. [J] */
const SMOOTH_J = 150

/** Whether the car stands in front of a piece, or behind the last. */
export function standsAt({ pieces, stops }: DayTables, edge: number): boolean {
  if (edge === 0 || edge === pieces) return true
  for (let s = 0; s < stops.length; s++) if (stops[s].beforePiece === edge) return true
  return false
}

/**
 * Energy from the bus for a change of speed; smooth where gains turn to losses.
 *
 * @returns [J]
 */
export function changeJ({ massKg, perGained, perLost }: Kinetic, fromMps: number, toMps: number): number {
  const J = 0.5 * massKg * (toMps * toMps - fromMps * fromMps)
  return perLost * J + (perGained - perLost) * 0.5 * (J + Math.sqrt(J * J + SMOOTH_J * SMOOTH_J) - SMOOTH_J)
}

/** What a change from rest or to rest costs beyond the middle of gains and losses; it grows with the speed. [J] */
export function lopsidedJ({ massKg, perGained, perLost }: Kinetic, speedMps: number): number {
  const J = 0.5 * massKg * speedMps * speedMps
  return (perGained - perLost) * 0.5 * (Math.sqrt(J * J + SMOOTH_J * SMOOTH_J) - SMOOTH_J)
}

/** Slope of `lopsidedJ` over the motion. */
export function lopsidedSlope({ massKg, perGained, perLost }: Kinetic, speedMps: number): number {
  const J = 0.5 * massKg * speedMps * speedMps
  return ((perGained - perLost) * 0.5 * J) / Math.sqrt(J * J + SMOOTH_J * SMOOTH_J)
}

/** Slope of `changeJ` over the motion gained. */
export function changeSlope({ massKg, perGained, perLost }: Kinetic, fromMps: number, toMps: number): number {
  const J = 0.5 * massKg * (toMps * toMps - fromMps * fromMps)
  return perLost + (perGained - perLost) * 0.5 * (1 + J / Math.sqrt(J * J + SMOOTH_J * SMOOTH_J))
}

/** Load of a piece at a speed and its slope over speed. */
export interface Load {
  W: number
  slope: number
}

/**
 * Load of a piece at a speed: the cubic through the speeds around it (Catmull and Rom), so that the slope has no
 * steps; straight on beyond the table.
 *
 * @param out  overwritten
 */
export function loadAt(day: DayTables, piece: number, speedMps: number, out: Load): Load {
  const { speeds, loadW } = day
  const last = speeds.count - 1
  const x = (speedMps - speeds.from) / speeds.step
  const inside = Math.min(Math.max(x, 0), last)
  const i = Math.min(inside | 0, last - 1)
  const at = piece * speeds.count + i
  const p1 = loadW[at]
  const p2 = loadW[at + 1]
  const p0 = i > 0 ? loadW[at - 1] : 2 * p1 - p2
  const p3 = i + 2 <= last ? loadW[at + 2] : 2 * p2 - p1
  const u = inside - i
  const a = 0.5 * (p3 - p0) + 1.5 * (p1 - p2)
  const b = p0 - 2.5 * p1 + 2 * p2 - 0.5 * p3
  const c = 0.5 * (p2 - p0)
  const slope = c + u * (2 * b + 3 * a * u)
  out.W = p1 + u * (c + u * (b + a * u)) + slope * (x - inside)
  out.slope = slope / speeds.step
  return out
}
