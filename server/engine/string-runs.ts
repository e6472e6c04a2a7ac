import { currentAtVoltage, type Diode, junctionCurrentA, junctionV, type OperatingPoint, openCircuitV } from './cell.ts'

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
export interface Run {
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

const MOST_STEPS = 100
/** Newton's last move over the thermal voltage: its square is the error left. */
const CLOSE_ENOUGH = 1e-8

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
export function runsOf(substrings: LitSubstring[]): Run[] {
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
export function pointOf(run: Run, x: number): Point {
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
export function fallingRoot(run: Run, f: (point: Point) => { value: number; slope: number }, startX: number): Point {
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
export const heldAt =
  (volts: number) =>
  ({ V, VI, Ix }: Point): { value: number; slope: number } => ({ value: volts - V, slope: -VI * Ix })

/** The run's best point; at one of its ends where its hill's top lies beyond. */
export function topOf(run: Run): OperatingPoint {
  const a = run.weakest.diode.thermalV
  const { I, V } = fallingRoot(run, growth, run.highX - a * Math.log1p(Math.max(0, run.highX) / a))
  return { W: I * V, V, A: I }
}
