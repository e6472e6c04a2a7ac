import { InputError } from './input-error.ts'
import { cholesky, dot, type Matrix, quadratic, solveLower, solveUpper, zeros } from './matrix.ts'

/**
 * What is held of the unknowns and the noise: given the noise variance s², the unknowns are normal about
 * `mean` with covariance s²·V, and s² is inverse gamma with `shape` and `rate`.
 */
export interface NormalInverseGamma {
  mean: Float64Array
  /** V: covariance of the unknowns in units of the noise variance. */
  covariance: Matrix
  shape: number
  rate: number
}

/** A Student-t statement: the value lies about `mean`, times a scale, with `dof` degrees of freedom. */
export interface Prediction {
  mean: number
  /** For a new reading, its noise included. */
  scale: number
  /** For the line itself. */
  lineScale: number
  dof: number
}

/**
 * What is held after readings y = row·unknowns + noise: the conjugate linear regression.
 *
 * V = (V0⁻¹ + XᵀX)⁻¹, mean = V(V0⁻¹m0 + Xᵀy), shape + n/2, rate + half of what is left unexplained and of
 * how far the unknowns moved. Reckoned in units of the prior, V0 = L·Lᵀ: the only system solved is
 * I + (X·L)ᵀ(X·L), which no set of readings can make singular.
 *
 * @param rows what each unknown is multiplied by, one row a reading (n × unknowns)
 * @param y    the readings (n)
 * @throws InputError when lengths differ, a number is none, or V0 is not positive definite
 * @source Raiffa & Schlaifer 1961; Gelman et al., Bayesian Data Analysis, ch. 14 (from memory)
 */
export function update(prior: NormalInverseGamma, rows: readonly Float64Array[], y: ArrayLike<number>) {
  checkArguments(prior, rows, y)
  const { mean: mean0, covariance } = prior
  const { size } = covariance
  const L = cholesky(covariance, 'prior.covariance')
  const steps = rows.map((row) => timesLower(row, L))
  const offsets = rows.map((row, i) => y[i] - dot(row, mean0))
  const system = zeros(size)
  const pull = new Float64Array(size)
  for (let i = 0; i < size; i++) system.data[i * size + i] = 1
  for (const [n, step] of steps.entries()) {
    for (let i = 0; i < size; i++) {
      pull[i] += step[i] * offsets[n]
      for (let j = 0; j < size; j++) system.data[i * size + j] += step[i] * step[j]
    }
  }
  const root = cholesky(system, 'rows')
  const move = solveUpper(root, solveLower(root, pull))
  const squares = steps.reduce((sum, step, n) => sum + (offsets[n] - dot(step, move)) ** 2, dot(move, move))
  return {
    mean: mean0.map((value, i) => value + dot(L.data.subarray(i * size, (i + 1) * size), move)),
    covariance: narrowed(L, root),
    shape: prior.shape + rows.length / 2,
    rate: prior.rate + squares / 2,
  } satisfies NormalInverseGamma
}

/** row·L for a lower triangle. */
function timesLower(row: Float64Array, { size, data }: Matrix): Float64Array {
  const out = new Float64Array(size)
  for (let i = 0; i < size; i++) {
    for (let j = 0; j <= i; j++) out[j] += row[i] * data[i * size + j]
  }
  return out
}

/** L·(R·Rᵀ)⁻¹·Lᵀ, as the products of the columns of R⁻¹Lᵀ. */
function narrowed(L: Matrix, root: Matrix): Matrix {
  const { size } = L
  const columns = Array.from({ length: size }, (_, i) => solveLower(root, L.data.slice(i * size, (i + 1) * size)))
  const out = zeros(size)
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) out.data[i * size + j] = dot(columns[i], columns[j])
  }
  return out
}

/**
 * What a further reading would show, and where the line lies at that point.
 *
 * @param row what each unknown is multiplied by there
 */
export function predict(held: NormalInverseGamma, row: ArrayLike<number>): Prediction {
  if (row.length !== held.mean.length) {
    throw new InputError('wrong-length', 'row', `${row.length} given, ${held.mean.length} expected`)
  }
  const spread = Math.max(quadratic(held.covariance, row), 0)
  const noise = held.rate / held.shape
  return {
    mean: dot(row, held.mean),
    scale: Math.sqrt(noise * (1 + spread)),
    lineScale: Math.sqrt(noise * spread),
    dof: 2 * held.shape,
  }
}

function checkArguments(prior: NormalInverseGamma, rows: readonly Float64Array[], y: ArrayLike<number>): void {
  const { mean, covariance, shape, rate } = prior
  if (!(shape > 0 && shape < Infinity))
    throw new InputError('out-of-range', 'prior.shape', `${shape} given, above 0 expected`)
  if (!(rate > 0 && rate < Infinity))
    throw new InputError('out-of-range', 'prior.rate', `${rate} given, above 0 expected`)
  if (covariance.size !== mean.length) {
    throw new InputError('wrong-length', 'prior.covariance', `${covariance.size} given, ${mean.length} expected`)
  }
  if (y.length !== rows.length) throw new InputError('wrong-length', 'y', `${y.length} given, ${rows.length} expected`)
  for (const [i, row] of rows.entries()) {
    if (row.length !== mean.length) {
      throw new InputError('wrong-length', `rows[${i}]`, `${row.length} given, ${mean.length} expected`)
    }
    if (!row.every(Number.isFinite)) throw new InputError('not-a-number', `rows[${i}]`, 'finite numbers expected')
    if (!Number.isFinite(y[i])) throw new InputError('not-a-number', `y[${i}]`, `${y[i]} given, a number expected`)
  }
}
