import { InputError } from './input-error.ts'

/** A square matrix, row after row: `size` × `size` numbers. */
export interface Matrix {
  size: number
  data: Float64Array
}

/** A matrix of zeros. */
export const zeros = (size: number): Matrix => ({ size, data: new Float64Array(size * size) })

/** A matrix with these values on its diagonal and zeros elsewhere. */
export function diagonal(values: ArrayLike<number>): Matrix {
  const matrix = zeros(values.length)
  for (let i = 0; i < values.length; i++) matrix.data[i * values.length + i] = values[i]
  return matrix
}

/** Every entry times a factor. */
export const scaled = ({ size, data }: Matrix, factor: number): Matrix => ({ size, data: data.map((v) => v * factor) })

/** The square of `size` rows and columns that starts at row and column `from`. */
export function block(matrix: Matrix, from: number, size: number): Matrix {
  const part = zeros(size)
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) part.data[i * size + j] = matrix.data[(from + i) * matrix.size + from + j]
  }
  return part
}

/** Writes a smaller matrix into a larger one, its first entry at row and column `from`. */
export function placeBlock(into: Matrix, from: number, part: Matrix): void {
  for (let i = 0; i < part.size; i++) {
    for (let j = 0; j < part.size; j++) into.data[(from + i) * into.size + from + j] = part.data[i * part.size + j]
  }
}

/**
 * The lower triangle L with L·Lᵀ equal to a symmetric, positive definite matrix.
 *
 * @param field the caller's name for the matrix
 * @throws InputError when the matrix is not positive definite or holds something that is no number
 * @source Cholesky's factorisation; Golub & Van Loan, Matrix Computations, §4.2 (from memory)
 */
export function cholesky({ size, data }: Matrix, field: string): Matrix {
  const lower = zeros(size)
  const L = lower.data
  for (let i = 0; i < size; i++) {
    for (let j = 0; j <= i; j++) {
      let rest = data[i * size + j]
      for (let k = 0; k < j; k++) rest -= L[i * size + k] * L[j * size + k]
      if (i !== j) L[i * size + j] = rest / L[j * size + j]
      else if (rest > 0 && rest < Infinity) L[i * size + i] = Math.sqrt(rest)
      else throw new InputError('not-positive-definite', field, `row ${i} leaves ${rest}, a number above 0 expected`)
    }
  }
  return lower
}

/** Solves L·x = b for a lower triangle, in place of b. */
export function solveLower({ size, data }: Matrix, b: Float64Array): Float64Array {
  for (let i = 0; i < size; i++) {
    for (let k = 0; k < i; k++) b[i] -= data[i * size + k] * b[k]
    b[i] /= data[i * size + i]
  }
  return b
}

/** Solves Lᵀ·x = b for a lower triangle, in place of b. */
export function solveUpper({ size, data }: Matrix, b: Float64Array): Float64Array {
  for (let i = size - 1; i >= 0; i--) {
    for (let k = i + 1; k < size; k++) b[i] -= data[k * size + i] * b[k]
    b[i] /= data[i * size + i]
  }
  return b
}

/** Inverse of a symmetric, positive definite matrix; see cholesky. */
export function inverse(matrix: Matrix, field: string): Matrix {
  const lower = cholesky(matrix, field)
  const { size } = matrix
  const out = zeros(size)
  for (let j = 0; j < size; j++) {
    const unit = new Float64Array(size)
    unit[j] = 1
    out.data.set(solveUpper(lower, solveLower(lower, unit)), j * size)
  }
  return out
}

/** xᵀ·A·x. */
export function quadratic({ size, data }: Matrix, x: ArrayLike<number>): number {
  let sum = 0
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) sum += x[i] * data[i * size + j] * x[j]
  }
  return sum
}

/** Square roots of the diagonal. */
export const rootDiagonal = ({ size, data }: Matrix): Float64Array =>
  Float64Array.from({ length: size }, (_, i) => Math.sqrt(Math.max(data[i * size + i], 0)))

/** Sum of products of two vectors of one length. */
export function dot(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let sum = 0
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i]
  return sum
}
