import { type CellReference, deSoto } from './cell.ts'
import { type StringModel, substringsOf } from './substrings.ts'

/**
 * A string laid out in typed arrays, with room for the values of one step: parts are equal cells in one light, a
 * substring's parts stand side by side. `string-step.ts` fills it, `string-point.ts` solves it; nothing is allocated.
 */
export interface StringSolver {
  cell: CellReference
  rows: number
  panel: Int32Array
  cells: Float64Array
  lightShare: Float64Array
  /** First part of each substring, and the end of the last. (substrings + 1) */
  firstPart: Int32Array
  dropV: Float64Array
  /** One cell of each part in the step's light. */
  lightA: Float64Array
  saturationA: Float64Array
  thermalV: Float64Array
  shuntS: Float64Array
  /** Just above the open-circuit voltage: that without a shunt. */
  openV: Float64Array
  /** The step's substrings that carry current, from the last to give way to the first. */
  order: Int32Array
  /** By place in the order: hardly above the current at which it gives way, parts up to its end. */
  pastA: Float64Array
  partsUpTo: Int32Array
  /** By place in the order: open-circuit voltage of the substrings up to it less the drops of those behind. */
  mostV: Float64Array
  lostV: Float64Array
  /** Parts in the substrings' order. */
  part: Int32Array
  /** Substrings that carry current in this step, and what going past the others costs. */
  carrying: number
  darkV: number
  /** Place on the curve: junction voltage of each part of the order. */
  junctionV: Float64Array
  /** Current, voltage, and slopes of the curve there; see `string-curve.ts`. */
  point: Float64Array
}

const HOT_C = 90

/**
 * Whether a cell is like any real one, so that the solver finds its strings' points: at 1000 W/m² and 90 °C an
 * open-circuit voltage, without shunt, of more than 10 thermal voltages, five times what the series resistance loses of
 * it and a quarter of what the shunt would hold.
 */
export function isSolvable(cell: CellReference): boolean {
  const { lightA, saturationA, thermalV, seriesOhm, shuntOhm } = deSoto(cell, 1000, HOT_C)
  if (!(lightA > saturationA)) return false
  const openV = thermalV * Math.log(lightA / saturationA)
  return openV > 10 * thermalV && openV > 5 * lightA * seriesOhm && 4 * openV < lightA * shuntOhm
}

/** A string made ready; check it before, and `isSolvable` of its cell. */
export function stringSolver(string: StringModel): StringSolver {
  const substrings = substringsOf(string)
  const parts = substrings.flatMap((substring) => substring.parts.map((part) => ({ ...part, panel: substring.panel })))
  const perPart = (): Float64Array => new Float64Array(parts.length)
  const perSubstring = (): Float64Array => new Float64Array(substrings.length)
  const firstPart = new Int32Array(substrings.length + 1)
  substrings.forEach((substring, s) => {
    firstPart[s + 1] = firstPart[s] + substring.parts.length
  })
  return {
    cell: string.cell,
    rows: string.cellsInParallel,
    panel: Int32Array.from(parts, (part) => part.panel),
    cells: Float64Array.from(parts, (part) => part.cells),
    lightShare: Float64Array.from(parts, (part) => part.lightShare),
    firstPart,
    dropV: Float64Array.from(substrings, (substring) => substring.dropV),
    lightA: perPart(),
    saturationA: perPart(),
    thermalV: perPart(),
    shuntS: perPart(),
    openV: perPart(),
    order: new Int32Array(substrings.length),
    pastA: perSubstring(),
    partsUpTo: new Int32Array(substrings.length),
    mostV: perSubstring(),
    lostV: perSubstring(),
    part: new Int32Array(parts.length),
    carrying: 0,
    darkV: 0,
    junctionV: perPart(),
    point: new Float64Array(5),
  }
}
