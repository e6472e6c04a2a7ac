import { fullOnBench, type Told, toldByBench } from './bench-told.ts'
import { InputError } from './input-error.ts'
import { lossesOf } from './loss-terms.ts'
import type { TrackerLosses } from './tracker.ts'

/** One reading on the bench: what went in and came out, the latter as power or as a share of the input. */
export interface BenchPoint {
  inputV: number
  outputV: number
  inputW: number
  outputW?: number
  /** Output over input power, above 0 up to 1. */
  efficiency?: number
  /** Standard deviation of that share; 0.005 where left out. The fit weighs all points alike. */
  efficiencySd?: number
}

export interface LossFit {
  losses: TrackerLosses
  /** Root mean square of what the fit leaves unexplained. */
  rmsW: number
  /** Which terms the points tell, each good to its `efficiencySd`. */
  told: Told
}

/** Standard deviation of a point's efficiency where none is given; a careful bench. Ours; no source. */
const USUAL_SD = 0.005

const TERMS = 4

/**
 * Loss terms of a tracker from bench points: least squares of the lost watts with no term below 0.
 *
 * Tries each of the sixteen choices of terms and keeps the best that has none negative, which is the
 * optimum. Points at several voltages are needed to tell switching from rectifier: terms that the points
 * cannot tell apart are given to as few as explain them, and `told` says so.
 *
 * @param points at least four
 * @throws InputError naming the point and field that is wrong
 * @source Lawson & Hanson, Solving Least Squares Problems, 1974, ch. 23 (the problem; solved here by trying all)
 */
export function fitLosses(points: readonly BenchPoint[]): LossFit {
  if (points.length < TERMS) {
    throw new InputError('too-few', 'points', `${points.length} given, at least ${TERMS} expected`)
  }
  const rows = points.map(lossRow)
  let best: { terms: number[]; squares: number } = { terms: [0, 0, 0, 0], squares: squaresLeft(rows, [0, 0, 0, 0]) }
  for (let choice = 1; choice < 1 << TERMS; choice++) {
    const chosen = [0, 1, 2, 3].filter((k) => ((choice >> k) & 1) === 1)
    const terms = leastSquares(rows, chosen)
    if (terms === null || terms.some((term) => term < 0)) continue
    const squares = squaresLeft(rows, terms)
    // The margin keeps a term out that only fits the last digits.
    if (squares < best.squares * (1 - 1e-9)) best = { terms, squares }
  }
  const spread = points.map((point) => ({ ...point, efficiencySd: point.efficiencySd ?? USUAL_SD }))
  const told = toldByBench(spread, fullOnBench(points, Math.max(...points.map((p) => p.inputW))))
  return { losses: lossesOf(best.terms), rmsW: Math.sqrt(best.squares / rows.length), told }
}

/** What each term is multiplied by at a point, and the watts lost there. */
interface LossRow {
  factors: number[]
  lossW: number
}

function lossRow(point: BenchPoint, i: number): LossRow {
  const { inputV, outputV, inputW } = point
  const check = (name: keyof BenchPoint, isGood: boolean, wanted: string): void => {
    if (isGood) return
    throw new InputError('out-of-range', `points[${i}].${name}`, `${point[name]} given, ${wanted} expected`)
  }
  for (const name of ['inputV', 'outputV', 'inputW'] as const) {
    check(name, point[name] > 0 && point[name] < Infinity, 'a number above 0')
  }
  if ((point.outputW === undefined) === (point.efficiency === undefined)) {
    throw new InputError('ambiguous', `points[${i}]`, 'either outputW or efficiency expected')
  }
  if (point.efficiency !== undefined)
    check('efficiency', point.efficiency > 0 && point.efficiency <= 1, 'above 0 up to 1')
  check('efficiencySd', point.efficiencySd === undefined || point.efficiencySd > 0, 'a number above 0')
  const outputW = point.outputW ?? (point.efficiency ?? 0) * inputW
  check('outputW', outputW > 0 && outputW <= inputW, `above 0 up to the input's ${inputW}`)
  const inputA = inputW / inputV
  return { factors: [1, inputA * outputV, inputA * inputA, outputW / outputV], lossW: inputW - outputW }
}

const squaresLeft = (rows: readonly LossRow[], terms: readonly number[]): number =>
  rows.reduce((sum, { factors, lossW }) => {
    const left = lossW - factors.reduce((total, factor, k) => total + factor * terms[k], 0)
    return sum + left * left
  }, 0)

/** Least squares over the chosen terms by orthogonal columns; null where they cannot be told apart. */
function leastSquares(rows: readonly LossRow[], chosen: readonly number[]): number[] | null {
  const columns = chosen.map((k) => rows.map(({ factors }) => factors[k]))
  const left = rows.map(({ lossW }) => lossW)
  const upper = columns.map(() => chosen.map(() => 0))
  const onto: number[] = []
  for (const [j, column] of columns.entries()) {
    const before = Math.sqrt(dot(column, column))
    // Twice is enough to keep the columns at right angles to the last digit.
    for (let pass = 0; pass < 2; pass++) {
      for (let i = 0; i < j; i++) upper[i][j] += takeAway(column, columns[i])
    }
    upper[j][j] = Math.sqrt(dot(column, column))
    if (!(upper[j][j] > 1e-9 * before)) return null
    for (let r = 0; r < column.length; r++) column[r] /= upper[j][j]
    onto[j] = takeAway(left, column)
  }
  return backSubstitute(upper, onto, chosen)
}

const dot = (a: readonly number[], b: readonly number[]): number => a.reduce((sum, value, i) => sum + value * b[i], 0)

/** Takes the part along a unit column out of a vector and returns its size. */
function takeAway(vector: number[], unit: readonly number[]): number {
  const part = dot(vector, unit)
  for (let r = 0; r < vector.length; r++) vector[r] -= part * unit[r]
  return part
}

function backSubstitute(upper: readonly number[][], onto: readonly number[], chosen: readonly number[]): number[] {
  const terms = Array.from({ length: TERMS }, () => 0)
  for (let j = chosen.length - 1; j >= 0; j--) {
    let value = onto[j]
    for (let i = j + 1; i < chosen.length; i++) value -= upper[j][i] * terms[chosen[i]]
    terms[chosen[j]] = value / upper[j][j]
  }
  return terms
}
