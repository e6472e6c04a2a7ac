import type { CellReference } from '../../server/engine/cell.ts'
import { solveBest, solveBestBetween, solveHeld } from '../../server/engine/string-point.ts'
import { stringSolver } from '../../server/engine/string-solver.ts'
import { loadStep } from '../../server/engine/string-step.ts'
import { type CellFault, cellsUnderDiode, type StringModel } from '../../server/engine/substrings.ts'
import { referenceRows } from '../support/reference.ts'

/** Cells in series in the strings of test/reference/cell.csv, by its head; its values are those of the whole string. */
const IN_SERIES = new Map([
  ['A', 38],
  ['B', 60],
  ['C', 20],
])

/** One cell of each kind of string in test/reference/cell.csv: silicon and gallium arsenide, all invented. */
export const CELLS: CellReference[] = [
  ...new Map(referenceRows('cell.csv').map((row) => [row.string, row])).values(),
].map((row) => {
  const inSeries = IN_SERIES.get(row.string) ?? Number.NaN
  return {
    lightA: Number(row.I_L_ref),
    saturationA: Number(row.I_o_ref),
    seriesOhm: Number(row.R_s) / inSeries,
    shuntOhm: Number(row.R_sh_ref) / inSeries,
    modifiedIdealityV: Number(row.a_ref) / inSeries,
    currentCoefficientAPerC: Number(row.alpha_sc),
    bandGapEv: Number(row.EgRef),
    bandGapPerC: Number(row.dEgdT),
  }
})

/** A string and the light and warmth of its panels. */
export interface StringCase {
  string: StringModel
  lights: number[]
  warmths: number[]
}

/**
 * A string by chance: 1 to 6 panels of unlike or of similar light from 5 to 1300 W/m² (one in fourteen is dark), −10 to
 * 90 °C, no to three bypass diodes a panel, and in a third of the strings weak, shorted or open cells.
 */
export function stringByChance(random: () => number): StringCase {
  const whole = (least: number, most: number): number => least + Math.floor(random() * (most - least + 1))
  const anyLight = (): number => 5 * 260 ** random()
  const groups = Array.from({ length: whole(1, 6) }, (_, panel) => ({
    panel,
    cellsInSeries: whole(4, 40),
    bypassDiodes: random() < 0.1 ? 0 : whole(1, 3),
  }))
  const share = random()
  const middleWm2 = anyLight()
  const lightBy = (): number => {
    if (share < 0.5) return Math.max(5, middleWm2 * (0.75 + 0.25 * random()))
    return random() < 0.07 ? 0 : anyLight()
  }
  const warmth = -10 + 100 * random()
  const faults = random() < 0.33 ? [faultByChance(random, groups[whole(0, groups.length - 1)])] : []
  return {
    string: {
      name: 'by chance',
      cell: CELLS[whole(0, CELLS.length - 1)],
      groups,
      faults,
      cellsInParallel: 1,
      soilingFraction: random() < 0.5 ? 0 : 0.1 * random(),
      bypassV: random() < 0.2 ? 0.05 : 0.5,
    },
    lights: groups.map(lightBy),
    warmths: groups.map(() => Math.min(90, Math.max(-10, warmth + 20 * (random() - 0.5)))),
  }
}

/** One to three cells under one diode of a group; its index is its panel's. */
export function faultByChance(
  random: () => number,
  group: { panel: number; cellsInSeries: number; bypassDiodes: number },
): CellFault {
  const diode = Math.floor(random() * Math.max(1, group.bypassDiodes))
  const most = Math.min(3, cellsUnderDiode(group.cellsInSeries, group.bypassDiodes, diode))
  const kinds = ['weak', 'weak', 'weak', 'shorted', 'open'] as const
  return {
    group: group.panel,
    diode,
    cells: 1 + Math.floor(random() * most),
    kind: kinds[Math.floor(random() * kinds.length)],
    lightShare: random(),
  }
}

/** What the fast solver says of a case: its best point, and power at held voltages. */
export function solved({ string, lights, warmths }: StringCase): {
  W: number
  V: number
  A: number
  heldW: (volts: number) => number
  bestBetween: (lowV: number, highV: number) => { W: number; V: number }
} {
  const solver = stringSolver(string)
  loadStep(
    solver,
    lights.map((light) => Float64Array.of(light)),
    warmths.map((warmth) => Float64Array.of(warmth)),
    0,
  )
  const best = new Float64Array(3)
  solveBest(solver, best)
  const [W, V, A] = best
  return {
    W,
    V,
    A,
    heldW: (volts) => solveHeld(solver, volts),
    bestBetween: (lowV, highV) => {
      solveBestBetween(solver, { lowV, highV }, best)
      return { W: best[0], V: best[1] }
    },
  }
}

/**
 * A string of junctions without resistances, in which everything can be worked by hand: a cell of so many amperes gives
 * 1.00947 V + 0.00145 V · ln(1 − I/IL), almost square, with its best point at 1 V.
 */
export const squareString = (more: Partial<StringModel>): StringModel => ({
  name: 'square',
  cell: {
    lightA: SQUARE_A,
    saturationA: SQUARE_A * Math.exp(-SQUARE_OPEN_V / SQUARE_THERMAL_V),
    seriesOhm: 0,
    shuntOhm: 1e12,
    modifiedIdealityV: SQUARE_THERMAL_V,
    currentCoefficientAPerC: 0,
    bandGapEv: 1.121,
    bandGapPerC: -0.0002677,
  },
  groups: [],
  cellsInParallel: 1,
  soilingFraction: 0,
  bypassV: 0.5,
  ...more,
})

/** Light current at 1000 W/m². [A] */
export const SQUARE_A = 6
/** At 1000 W/m²; each factor e of light is a thermal voltage more. [V] */
export const SQUARE_OPEN_V = 1.00947
export const SQUARE_THERMAL_V = 0.00145

/** Best of a function of current by a scan in even steps and then by thirds; for hills of any number. */
export function highestW(powerW: (amps: number) => number, mostA: number): number {
  const steps = 2000
  let top = 0
  for (let k = 1; k <= steps; k++) if (powerW((k * mostA) / steps) > powerW((top * mostA) / steps)) top = k
  let [from, to] = [(Math.max(0, top - 1) * mostA) / steps, ((top + 1) * mostA) / steps]
  for (let i = 0; i < 120; i++) {
    const [a, b] = [from + (to - from) / 3, to - (to - from) / 3]
    if (powerW(a) > powerW(b)) to = b
    else from = a
  }
  return Math.max(0, powerW((from + to) / 2))
}
