import { type CoastCar, type CoastLoad, type CoastRun, coastTrace, type LoadTerm } from './coast-down-trace.ts'
import { cholesky, type Matrix, solveLower, solveUpper, zeros } from './matrix.ts'

/** What is held of the linear rolling term before the runs: fixed at the value where sd is 0. */
export interface LinearPrior {
  rollingPerMps: number
  sdPerMps: number
}

/** Unknowns of a fit: the terms shared by all runs, and each run's start speed. */
export interface CoastUnknowns {
  load: CoastLoad
  startMps: Float64Array
}

/** Least squares at its end. */
export interface LeastSquares extends CoastUnknowns {
  /** By run: measured less fitted. [m/s] */
  residuals: Float64Array[]
  squares: number
  /** Inverse of the normal matrix for a noise of 1 (m/s)²; the terms first, then the start speeds. */
  normal: Matrix
  isSettled: boolean
}

/** Steps of this size in every unknown make no difference. [unit of each term; m/s for start speeds] */
const TYPICAL: Record<LoadTerm, number> = {
  rollingCoefficient: 1e-3,
  dragAreaM2: 1e-2,
  rollingPerMps: 1e-5,
  windMps: 0.1,
  gradeRad: 1e-4,
}
const SETTLED = 1e-8
const MOST_STEPS = 60
const MOST_DAMPING = 1e12

/**
 * Terms and start speeds that bring the integrated speeds closest to the logged ones.
 *
 * Gauss–Newton with exact slopes, damped where a step would make it worse (Levenberg 1944, Marquardt 1963). Speeds
 * are compared, not decelerations, so that noise is never differentiated.
 *
 * @param terms      the terms to be found; the others stay as they start
 * @param from       where to start
 * @param prior      of the linear term, used where it is among the terms
 * @param varianceMps2 variance of one independent row, which weighs the prior. [(m/s)²]
 * @source Levenberg 1944; Marquardt 1963; Nocedal & Wright, Numerical Optimization, ch. 10 (from memory)
 */
export function fitTerms(
  car: CoastCar,
  runs: readonly CoastRun[],
  terms: readonly LoadTerm[],
  from: CoastUnknowns,
  prior: LinearPrior,
  varianceMps2: number,
): LeastSquares {
  const system = (at: CoastUnknowns): System => systemAt(car, runs, terms, at, prior, varianceMps2)
  let here = { at: from, ...system(from) }
  let damping = 1e-3
  let isSettled = false
  for (let step = 0; step < MOST_STEPS && !isSettled && damping < MOST_DAMPING; step++) {
    const move = solved(here.normal, here.pull, damping)
    const at = move === null ? null : moved(here.at, terms, move)
    const next = at === null ? null : { at, ...system(at) }
    if (move === null || next === null || !(next.cost <= here.cost * (1 + 1e-12))) {
      damping *= 10
      // A step that the damping made small says nothing.
      isSettled = move !== null && damping <= 1 && isSmall(terms, move)
      continue
    }
    isSettled = isSmall(terms, move)
    damping = Math.max(damping / 10, 1e-9)
    here = next
  }
  const { normal, residuals, squares, at } = here
  return { ...at, residuals, squares, normal, isSettled }
}

/** Squares, their gradient and curvature at one place. */
interface System {
  normal: Matrix
  pull: Float64Array
  residuals: Float64Array[]
  squares: number
  /** Squares and the prior's part. */
  cost: number
}

/**
 * Normal equations JᵀJ·move = Jᵀr of all runs at some unknowns, the prior of the linear term included.
 */
export function systemAt(
  car: CoastCar,
  runs: readonly CoastRun[],
  terms: readonly LoadTerm[],
  { load, startMps }: CoastUnknowns,
  prior: LinearPrior,
  varianceMps2: number,
): System {
  const size = terms.length + runs.length
  const normal = zeros(size)
  const pull = new Float64Array(size)
  let squares = 0
  const residuals = runs.map((run, r) => {
    const { speedMps, slopes } = coastTrace(car, run, load, startMps[r], terms)
    const left = run.speedMps.map((measured, i) => measured - speedMps[i])
    for (const value of left) squares += value * value
    addRun(normal, pull, slopes, left, terms.length, r)
    return left
  })
  const j = terms.indexOf('rollingPerMps')
  let cost = squares
  if (j >= 0) {
    const weight = varianceMps2 / prior.sdPerMps ** 2
    const offset = prior.rollingPerMps - load.rollingPerMps
    normal.data[j * size + j] += weight
    pull[j] += weight * offset
    cost += weight * offset * offset
  }
  return { normal, pull, residuals, squares, cost }
}

function addRun(
  normal: Matrix,
  pull: Float64Array,
  slopes: Float64Array,
  left: Float64Array,
  terms: number,
  r: number,
): void {
  const { size, data } = normal
  const width = terms + 1
  const place = (j: number): number => (j < terms ? j : terms + r)
  for (let a = 0; a < width; a++) {
    for (let b = 0; b <= a; b++) {
      let sum = 0
      for (let i = 0; i < left.length; i++) sum += slopes[i * width + a] * slopes[i * width + b]
      data[place(a) * size + place(b)] += sum
      if (a !== b) data[place(b) * size + place(a)] += sum
    }
    let sum = 0
    for (let i = 0; i < left.length; i++) sum += slopes[i * width + a] * left[i]
    pull[place(a)] += sum
  }
}

/** The move that the damped equations give, in the unknowns' own units; null where they have none. */
function solved(normal: Matrix, pull: Float64Array, damping: number): Float64Array | null {
  const { size } = normal
  const { scale, scaled } = unitDiagonal(normal)
  for (let i = 0; i < size; i++) scaled.data[i * size + i] += damping
  const lower = factor(scaled)
  if (lower === null) return null
  const move = solveUpper(
    lower,
    solveLower(
      lower,
      pull.map((value, i) => value * scale[i]),
    ),
  )
  return move.map((value, i) => value * scale[i])
}

/** A matrix with ones on its diagonal, and the scale of each row that makes it so. */
function unitDiagonal({ size, data }: Matrix): { scale: Float64Array; scaled: Matrix } {
  const scale = Float64Array.from({ length: size }, (_, i) => 1 / Math.sqrt(Math.max(data[i * size + i], 1e-300)))
  const scaled = { size, data: data.map((value, k) => value * scale[Math.floor(k / size)] * scale[k % size]) }
  return { scale, scaled }
}

function factor(matrix: Matrix): Matrix | null {
  try {
    return cholesky(matrix, 'runs')
  } catch {
    return null
  }
}

/**
 * Covariance of the terms alone: the inverse normal matrix times the variance of a row.
 *
 * @returns terms × terms; null where the runs cannot tell the terms apart at all
 */
export function termCovariance(normal: Matrix, terms: number, varianceMps2: number): Matrix | null {
  const { size } = normal
  const { scale, scaled } = unitDiagonal(normal)
  const lower = factor(scaled)
  if (lower === null) return null
  const out = zeros(terms)
  for (let j = 0; j < terms; j++) {
    const unit = new Float64Array(size)
    unit[j] = 1
    const column = solveUpper(lower, solveLower(lower, unit))
    for (let i = 0; i < terms; i++) out.data[i * terms + j] = column[i] * scale[i] * scale[j] * varianceMps2
  }
  return out.data.every(Number.isFinite) ? out : null
}

function moved({ load, startMps }: CoastUnknowns, terms: readonly LoadTerm[], move: Float64Array): CoastUnknowns {
  const next = { ...load }
  for (const [j, term] of terms.entries()) next[term] += move[j]
  return { load: next, startMps: startMps.map((speed, r) => speed + move[terms.length + r]) }
}

const isSmall = (terms: readonly LoadTerm[], move: Float64Array): boolean =>
  move.every((value, j) => Math.abs(value) < SETTLED * (j < terms.length ? TYPICAL[terms[j]] : 1))
