import { describe, expect, it } from 'vitest'
import {
  block,
  cholesky,
  diagonal,
  inverse,
  placeBlock,
  quadratic,
  rootDiagonal,
  scaled,
  solveLower,
  solveUpper,
  zeros,
} from '../../server/engine/matrix.ts'

const square = (...data: number[]) => ({ size: Math.sqrt(data.length), data: Float64Array.from(data) })

/** A textbook case with a triangle of whole numbers. */
const A = square(4, 12, -16, 12, 37, -43, -16, -43, 98)

describe('matrices', () => {
  it('have the triangle 2 / 6 1 / −8 5 3, worked by hand', () => {
    expect([...cholesky(A, 'A').data]).toEqual([2, 0, 0, 6, 1, 0, -8, 5, 3])
  })

  it('solve through it', () => {
    // A·(1, 2, 3) by hand.
    const b = Float64Array.of(4 + 24 - 48, 12 + 74 - 129, -16 - 86 + 294)
    const lower = cholesky(A, 'A')
    const x = solveUpper(lower, solveLower(lower, b))
    for (const [i, value] of [1, 2, 3].entries()) expect(x[i]).toBeCloseTo(value, 12)
  })

  it('have the inverse 49.3611 −13.5556 2.1111 / −13.5556 3.7778 −0.5556 / 2.1111 −0.5556 0.1111, by hand', () => {
    const expected = [1777 / 36, -122 / 9, 19 / 9, -122 / 9, 34 / 9, -5 / 9, 19 / 9, -5 / 9, 1 / 9]
    for (const [k, value] of inverse(A, 'A').data.entries()) expect(value).toBeCloseTo(expected[k], 9)
  })

  it('are refused by name when no covariance', () => {
    expect(() => cholesky(square(1, 2, 2, 1), 'prior.covariance')).toThrowError(/prior.covariance: row 1 leaves -3/)
    expect(() => cholesky(square(Number.NaN), 'V')).toThrowError(/V: row 0 leaves NaN/)
  })

  it('are cut and pasted, scaled and measured', () => {
    const big = zeros(3)
    placeBlock(big, 1, square(1, 2, 3, 4))
    expect([...big.data]).toEqual([0, 0, 0, 0, 1, 2, 0, 3, 4])
    expect([...block(big, 1, 2).data]).toEqual([1, 2, 3, 4])
    expect([...scaled(diagonal([1, 2]), 3).data]).toEqual([3, 0, 0, 6])
    expect(quadratic(square(1, 2, 2, 5), [3, -1])).toBe(9 - 12 + 5)
    expect([...rootDiagonal(diagonal([4, 9]))]).toEqual([2, 3])
  })
})
