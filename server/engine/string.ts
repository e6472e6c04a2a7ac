import {
  type CellReference,
  currentAtVoltage,
  type Diode,
  deSoto,
  junctionCurrentA,
  junctionV,
  maximumPower,
  type OperatingPoint,
  openCircuitV,
} from './cell.ts'

export type { CellReference } from './cell.ts'

/** Cells of a string that share one panel, and so one light and one temperature. */
export interface CellGroup {
  /** Index of the panel that carries them. */
  panel: number
  cellsInSeries: number
  /** Diodes that let current past them, in series; 1 where left out. */
  bypassDiodes?: number
}

/** Cells in series that feed one tracker; they may span panels. */
export interface StringModel {
  name: string
  /** One cell at 1000 W/m², 25 °C. */
  cell: CellReference
  groups: CellGroup[]
  cellsInParallel: number
  /** Share of the light that dust takes, 0..1. */
  soilingFraction: number
  /** Voltage lost over one bypass diode that carries the string's current. [V] */
  bypassV: number
}

/** A group in its light: one cell's curve, how many in series, and what going past them costs. */
export interface LitGroup {
  diode: Diode
  cells: number
  dropV: number
}

/** Currents between which the same groups carry the string, `on` from brightest to weakest; the others are bypassed. */
interface Run {
  on: LitGroup[]
  lostV: number
  /** The run's highest current. [A] */
  mostA: number
  /** Junction voltages of the weakest group at the run's highest and lowest current. [V] */
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
 * The string's groups in the light and temperature that each panel has.
 *
 * @param effectiveWm2  light past the cover per panel, before soiling. [W/m²]
 * @param cellC         cell temperature per panel. [°C]
 */
export function litGroups(string: StringModel, effectiveWm2: ArrayLike<number>, cellC: ArrayLike<number>): LitGroup[] {
  return string.groups.map((group) => ({
    diode: deSoto(string.cell, effectiveWm2[group.panel] * (1 - string.soilingFraction), cellC[group.panel]),
    cells: group.cellsInSeries,
    dropV: string.bypassV * (group.bypassDiodes ?? 1),
  }))
}

/** Current of one cell at which a group's voltage has sunk to its bypass drop; more goes past it. [A] */
const letsPastA = ({ diode, cells, dropV }: LitGroup): number =>
  diode.lightA > 0 ? currentAtVoltage(diode, -dropV / cells) : 0

function runsOf(groups: LitGroup[]): Run[] {
  const ranked = groups.map((group) => ({ group, pastA: letsPastA(group) })).sort((a, b) => b.pastA - a.pastA)
  const runs: Run[] = []
  ranked.forEach(({ group, pastA }, k) => {
    const nextA = k + 1 < ranked.length ? ranked[k + 1].pastA : 0
    if (!(pastA > nextA)) return
    runs.push({
      on: ranked.slice(0, k + 1).map((each) => each.group),
      lostV: ranked.slice(k + 1).reduce((sum, each) => sum + each.group.dropV, 0),
      mostA: pastA,
      lowX: pastA * group.diode.seriesOhm - group.dropV / group.cells,
      highX: junctionV(group.diode, nextA),
    })
  })
  return runs
}

/** The string's curve where the weakest group's junction stands at x. */
function pointOf(run: Run, x: number): Point {
  const weakest = run.on[run.on.length - 1].diode
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
    point.Ix = slope
    point.Ixx = bend
  }
  return point
}

/** Newton's method inside a bracket in which f falls through 0, halving where a step would leave it. */
function fallingRoot(run: Run, f: (point: Point) => { value: number; slope: number }, startX: number): Point {
  let { lowX, highX } = run
  let x = startX > lowX && startX < highX ? startX : 0.5 * (lowX + highX)
  const scale = run.on[run.on.length - 1].diode.thermalV
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

/**
 * Best point of cells in series in unequal light: the best over every set of groups that can carry the current.
 *
 * A group gives way to its bypass diodes when the current would push its voltage below their drop. Between such currents
 * power has one hill; the highest hill is the answer, and hills that cannot be higher are not climbed. Exact; one group
 * alone is its cells' own best point.
 *
 * @returns point of one row of cells: W, V over the whole series, A. All dark gives exactly 0 W
 * @source Bishop 1988 for the cell's curve; bypass rule worked by hand
 */
export function bestOfGroups(groups: LitGroup[]): OperatingPoint {
  if (groups.length === 1) {
    const best = maximumPower(groups[0].diode)
    return { W: best.W * groups[0].cells, V: best.V * groups[0].cells, A: best.A }
  }
  let best = NOTHING
  const runs = runsOf(groups)
  for (let r = runs.length - 1; r >= 0; r--) {
    const run = runs[r]
    if (run.mostA * pointOf(run, run.highX).V <= best.W) continue
    const a = run.on[run.on.length - 1].diode.thermalV
    const top = fallingRoot(run, growth, run.highX - a * Math.log1p(Math.max(0, run.highX) / a))
    if (top.I * top.V > best.W) best = { W: top.I * top.V, V: top.V, A: top.I }
  }
  return best
}

/**
 * Power of cells in series held at a voltage, 0 at and above their open-circuit voltage.
 *
 * @param volts  voltage over the whole series, ≥ 0. [V]
 * @returns power of one row of cells. [W]
 */
export function powerOfGroupsAtV(groups: LitGroup[], volts: number): number {
  const open = groups.reduce(
    (sum, { diode, cells, dropV }) => sum + (diode.lightA > 0 ? cells * openCircuitV(diode) : -dropV),
    0,
  )
  if (!(volts > 0) || volts >= open) return 0
  if (groups.length === 1) return volts * currentAtVoltage(groups[0].diode, volts / groups[0].cells)
  const run = runsOf(groups).find((each) => pointOf(each, each.highX).V >= volts && pointOf(each, each.lowX).V <= volts)
  if (run === undefined) return 0
  const { I } = fallingRoot(run, (point) => ({ value: volts - point.V, slope: -point.VI * point.Ix }), run.highX)
  return volts * I
}

/** Best power and voltage of a string in its panels' light; all rows of its cells together. */
export function stringBest(
  string: StringModel,
  effectiveWm2: ArrayLike<number>,
  cellC: ArrayLike<number>,
): OperatingPoint {
  const { W, V, A } = bestOfGroups(litGroups(string, effectiveWm2, cellC))
  return { W: W * string.cellsInParallel, V, A: A * string.cellsInParallel }
}

/** Power of a string held at a voltage in its panels' light; all rows of its cells together. [W] */
export const stringPowerAtV = (
  string: StringModel,
  effectiveWm2: ArrayLike<number>,
  cellC: ArrayLike<number>,
  volts: number,
): number => powerOfGroupsAtV(litGroups(string, effectiveWm2, cellC), volts) * string.cellsInParallel
