import {
  currentAtVoltage,
  type Diode,
  deSoto,
  junctionCurrentA,
  junctionV,
  maximumPower,
  type OperatingPoint,
  openCircuitV,
} from './cell.ts'
import { type StringModel, substringsOf } from './substrings.ts'

/** Equal cells in series: one cell's curve and how many. */
export interface LitCells {
  diode: Diode
  cells: number
}

/** A substring in its light: its cells, and what going past them costs; Infinity where nothing lets current past. */
export interface LitSubstring {
  parts: LitCells[]
  dropV: number
}

/** Currents between which the same cells carry the string; the other substrings are bypassed. */
interface Run {
  on: LitCells[]
  /** That of `on` with the least light, whose junction voltage marks the place on the curve. */
  weakest: LitCells
  lostV: number
  /** The run's highest current. [A] */
  mostA: number
  /** Junction voltages of the weakest cells at the run's highest and lowest current. [V] */
  lowX: number
  highX: number
}

/** The string's curve at one point: current, its two slopes over x; voltage, its two slopes over current. */
interface Point {
  I: number
  Ix: number
  Ixx: number
  V: number
  VI: number
  VII: number
}

const NOTHING: OperatingPoint = { W: 0, V: 0, A: 0 }
const MOST_STEPS = 100
/** Newton's last move over the thermal voltage: its square is the error left. */
const CLOSE_ENOUGH = 1e-8

/**
 * The string's substrings in the light and temperature that each panel has.
 *
 * @param effectiveWm2  light past the cover per panel, before soiling. [W/m²]
 * @param cellC         cell temperature per panel. [°C]
 */
export function litSubstrings(
  string: StringModel,
  effectiveWm2: ArrayLike<number>,
  cellC: ArrayLike<number>,
): LitSubstring[] {
  return substringsOf(string).map(({ panel, parts, dropV }) => ({
    dropV,
    parts: parts.map(({ cells, lightShare }) => ({
      cells,
      diode: deSoto(string.cell, effectiveWm2[panel] * lightShare, cellC[panel]),
    })),
  }))
}

const weakestOf = (parts: LitCells[]): LitCells =>
  parts.reduce((weak, each) => (each.diode.lightA < weak.diode.lightA ? each : weak))

const openV = (parts: LitCells[]): number =>
  parts.reduce((sum, { diode, cells }) => sum + cells * openCircuitV(diode), 0)

/** Current at which the weakest cells alone use up a voltage and all that the others can give. [A] */
function mostThroughA(parts: LitCells[], weakest: LitCells, volts: number): number {
  const others = openV(parts.filter((part) => part !== weakest))
  return junctionCurrentA(weakest.diode, -(volts + others) / weakest.cells)
}

/** Current at which a substring's voltage has sunk to its bypass drop; more goes past it. 0 where a cell is dark. [A] */
function letsPastA({ parts, dropV }: LitSubstring): number {
  if (parts.some(({ diode }) => !(diode.lightA > 0))) return 0
  if (dropV === Infinity) return Infinity
  if (parts.length === 1) return currentAtVoltage(parts[0].diode, -dropV / parts[0].cells)
  const weakest = weakestOf(parts)
  const run = runBetween(parts, weakest, 0, 0, mostThroughA(parts, weakest, dropV))
  return fallingRoot(run, heldAt(-dropV), run.highX).I
}

const runBetween = (on: LitCells[], weakest: LitCells, lostV: number, leastA: number, mostA: number): Run => ({
  on,
  weakest,
  lostV,
  mostA,
  lowX: junctionV(weakest.diode, mostA),
  highX: junctionV(weakest.diode, leastA),
})

/** From the highest currents, fewest cells and lowest voltages to the lowest currents. */
function runsOf(substrings: LitSubstring[]): Run[] {
  const ranked = substrings
    .map((substring) => ({ substring, pastA: letsPastA(substring) }))
    .sort((a, b) => b.pastA - a.pastA)
  if (ranked.some(({ substring, pastA }) => pastA === 0 && substring.dropV === Infinity)) return []
  const runs: Run[] = []
  ranked.forEach(({ pastA }, k) => {
    const nextA = k + 1 < ranked.length ? ranked[k + 1].pastA : 0
    if (!(pastA > nextA)) return
    const on = ranked.slice(0, k + 1).flatMap((each) => each.substring.parts)
    const weakest = weakestOf(on)
    const mostA = pastA === Infinity ? mostThroughA(on, weakest, 0) : pastA
    const lostV = ranked.slice(k + 1).reduce((sum, each) => sum + each.substring.dropV, 0)
    if (mostA > nextA) runs.push(runBetween(on, weakest, lostV, nextA, mostA))
  })
  return runs
}

/** The string's curve where the weakest cells' junction stands at x. */
function pointOf(run: Run, x: number): Point {
  const weakest = run.weakest.diode
  const I = junctionCurrentA(weakest, x)
  const point = { I, Ix: 0, Ixx: 0, V: -run.lostV, VI: 0, VII: 0 }
  for (const { diode, cells } of run.on) {
    const y = diode === weakest ? x : junctionV(diode, I)
    const grown = (diode.saturationA / diode.thermalV) * Math.exp(y / diode.thermalV)
    const slope = -grown - 1 / diode.shuntOhm
    const bend = -grown / diode.thermalV
    point.V += cells * (y - I * diode.seriesOhm)
    point.VI += cells * (1 / slope - diode.seriesOhm)
    point.VII -= (cells * bend) / slope ** 3
    if (diode !== weakest) continue
    point.Ix = slope
    point.Ixx = bend
  }
  return point
}

/** Newton's method inside a bracket in which f falls through 0, halving where a step would leave it. */
function fallingRoot(run: Run, f: (point: Point) => { value: number; slope: number }, startX: number): Point {
  let { lowX, highX } = run
  let x = startX > lowX && startX < highX ? startX : 0.5 * (lowX + highX)
  const scale = run.weakest.diode.thermalV
  for (let step = 0; step < MOST_STEPS; step++) {
    const { value, slope } = f(pointOf(run, x))
    if (value > 0) lowX = x
    else highX = x
    let next = x - value / slope
    if (!(next > lowX && next < highX)) next = 0.5 * (lowX + highX)
    const move = next - x
    x = next
    if (Math.abs(move) <= CLOSE_ENOUGH * scale) break
  }
  return pointOf(run, x)
}

/** Growth of power over x: dP/dx = I′·(V + I·dV/dI), and its slope. Each run has one hill. */
function growth({ I, Ix, Ixx, V, VI, VII }: Point): { value: number; slope: number } {
  const Q = V + I * VI
  return { value: Ix * Q, slope: Ixx * Q + Ix * Ix * (2 * VI + I * VII) }
}

/** What a voltage is over that of the curve, and its slope over x. */
const heldAt =
  (volts: number) =>
  ({ V, VI, Ix }: Point): { value: number; slope: number } => ({ value: volts - V, slope: -VI * Ix })

const isPlain = (substrings: LitSubstring[]): boolean => substrings.length === 1 && substrings[0].parts.length === 1

/**
 * Best point of cells in series in unequal light: the best over every set of substrings that can carry the current.
 *
 * A substring gives way to its bypass diodes when the current would push its voltage below their drop. Between such
 * currents power has one hill; the highest hill is the answer, and hills that cannot be higher are not climbed. Weak
 * cells in a substring are driven backwards by the others until it gives way. Exact; cells in one light are their own
 * best point.
 *
 * @returns point of one row of cells: W, V over the whole series, A. All dark gives exactly 0 W
 * @source Bishop 1988 for the cell's curve; bypass rule worked by hand
 */
export function bestOfSubstrings(substrings: LitSubstring[]): OperatingPoint {
  if (isPlain(substrings)) {
    const [{ diode, cells }] = substrings[0].parts
    const best = maximumPower(diode)
    return { W: best.W * cells, V: best.V * cells, A: best.A }
  }
  let best = NOTHING
  const runs = runsOf(substrings)
  for (let r = runs.length - 1; r >= 0; r--) {
    const run = runs[r]
    if (run.mostA * pointOf(run, run.highX).V <= best.W) continue
    const top = topOf(run)
    if (top.W > best.W) best = top
  }
  return best
}

/** The run's best point; at one of its ends where its hill's top lies beyond. */
function topOf(run: Run): OperatingPoint {
  const a = run.weakest.diode.thermalV
  const { I, V } = fallingRoot(run, growth, run.highX - a * Math.log1p(Math.max(0, run.highX) / a))
  return { W: I * V, V, A: I }
}

/**
 * Voltage between two at which cells in series give most: the top of a hill, or one of the two.
 *
 * @param lowV   ≥ 0. [V]
 * @param highV  ≥ lowV. [V]
 */
export function bestOfSubstringsBetweenV(substrings: LitSubstring[], lowV: number, highV: number): number {
  const edges = [lowV, highV].map((V) => ({ W: powerOfSubstringsAtV(substrings, V), V }))
  const tops = runsOf(substrings).map(topOf)
  const inside = tops.filter(({ V }) => V >= lowV && V <= highV)
  return [...edges, ...inside].reduce((best, each) => (each.W > best.W ? each : best)).V
}

/**
 * Power of cells in series held at a voltage, 0 at and above their open-circuit voltage.
 *
 * @param volts  voltage over the whole series, ≥ 0. [V]
 * @returns power of one row of cells. [W]
 */
export function powerOfSubstringsAtV(substrings: LitSubstring[], volts: number): number {
  if (!(volts > 0)) return 0
  if (isPlain(substrings)) {
    const [{ diode, cells }] = substrings[0].parts
    return volts < cells * openCircuitV(diode) ? volts * currentAtVoltage(diode, volts / cells) : 0
  }
  const run = runsOf(substrings).find((each) => pointOf(each, each.highX).V > volts)
  return run === undefined ? 0 : volts * fallingRoot(run, heldAt(volts), run.highX).I
}

/** Best power and voltage of a string in its panels' light; all rows of its cells together. */
export function stringBest(
  string: StringModel,
  effectiveWm2: ArrayLike<number>,
  cellC: ArrayLike<number>,
): OperatingPoint {
  const { W, V, A } = bestOfSubstrings(litSubstrings(string, effectiveWm2, cellC))
  return { W: W * string.cellsInParallel, V, A: A * string.cellsInParallel }
}

/** Power of a string held at a voltage in its panels' light; all rows of its cells together. [W] */
export const stringPowerAtV = (
  string: StringModel,
  effectiveWm2: ArrayLike<number>,
  cellC: ArrayLike<number>,
  volts: number,
): number => powerOfSubstringsAtV(litSubstrings(string, effectiveWm2, cellC), volts) * string.cellsInParallel

/** Voltage between two at which a string in its panels' light gives most. [V] */
export const stringBestBetweenV = (
  string: StringModel,
  effectiveWm2: ArrayLike<number>,
  cellC: ArrayLike<number>,
  span: { lowV: number; highV: number },
): number => bestOfSubstringsBetweenV(litSubstrings(string, effectiveWm2, cellC), span.lowV, span.highV)
