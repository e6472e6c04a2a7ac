import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { diagonal, inverse, type Matrix, quadratic } from '../../server/engine/matrix.ts'
import { truncateAtZero } from '../../server/engine/truncated.ts'

const pair = (correlation: number): Matrix => ({ size: 2, data: Float64Array.of(1, correlation, correlation, 1) })

describe('a normal cut off at nothing', () => {
  it('about nothing is half a normal: mean √(2/π), variance 1 − 2/π, and a mean square of one about its mode', () => {
    const { mode, mean, covariance } = truncateAtZero(Float64Array.of(0), diagonal([1]), [true])
    expect(mode[0]).toBe(0)
    expect(mean[0]).toBeCloseTo(Math.sqrt(2 / Math.PI), 10)
    expect(covariance.data[0]).toBeCloseTo(1 - 2 / Math.PI, 10)
  })

  it('far above it is left as it is, and unbounded unknowns too', () => {
    const mean = Float64Array.of(10, -3)
    const cut = truncateAtZero(mean, pair(0.5), [true, false])
    expect([...cut.mode]).toEqual([10, -3])
    for (let i = 0; i < 2; i++) expect(cut.mean[i]).toBeCloseTo(mean[i], 12)
    for (let k = 0; k < 4; k++) expect(cut.covariance.data[k]).toBeCloseTo(pair(0.5).data[k], 12)
  })

  it('far below it is an exponential of the tail', () => {
    const { mode, mean, covariance } = truncateAtZero(Float64Array.of(-50), diagonal([1]), [true])
    expect(mode[0]).toBe(0)
    expect(mean[0]).toBeCloseTo(1 / 50, 4)
    expect(Math.sqrt(covariance.data[0])).toBeCloseTo(1 / 50, 4)
  })

  // Rosenbaum 1961, J. Roy. Stat. Soc. B 23:405 (from memory): both above 0 with share 1/4 + asin ρ/2π.
  it.each([-0.7, -0.3, 0, 0.5, 0.9])('in two unknowns correlated by %f has their moments within 4 %', (rho) => {
    const share = 1 / 4 + Math.asin(rho) / (2 * Math.PI)
    const expectedMean = (1 + rho) / (2 * Math.sqrt(2 * Math.PI) * share)
    const square = 1 + (rho * Math.sqrt(1 - rho * rho)) / (2 * Math.PI * share)
    const { mean, covariance } = truncateAtZero(Float64Array.of(0, 0), pair(rho), [true, true])
    expect(Math.abs(mean[0] / expectedMean - 1)).toBeLessThan(0.038)
    expect(mean[1]).toBeCloseTo(mean[0], 9)
    expect(Math.abs((covariance.data[0] + mean[0] ** 2) / square - 1)).toBeLessThan(0.038)
  })

  it('carries what it learns to an unknown that goes along with it', () => {
    // Given x cut at 0 from N(0, 1): y moves by ρ times as much, and keeps 1 − ρ²·2/π of its variance.
    const { mean, covariance } = truncateAtZero(Float64Array.of(0, 0), pair(0.8), [true, false])
    expect(mean[1]).toBeCloseTo(0.8 * Math.sqrt(2 / Math.PI), 10)
    expect(covariance.data[3]).toBeCloseTo(1 - 0.64 * (2 / Math.PI), 10)
  })

  it('has as mode the nearest point that is nowhere negative: no other is likelier', () => {
    const number = (min: number, max: number) => fc.double({ min, max, noNaN: true })
    const three = fc.tuple(number(-2, 2), number(-2, 2), number(-2, 2))
    fc.assert(
      fc.property(
        three,
        three,
        three,
        fc.array(fc.tuple(number(0, 3), number(0, 3), number(-3, 3)), { minLength: 20 }),
        (m, a, b, others) => {
          const V = diagonal([0.3, 0.3, 0.3])
          for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) V.data[i * 3 + j] += a[i] * a[j] + b[i] * b[j]
          const { mode } = truncateAtZero(Float64Array.from(m), V, [true, true, false])
          expect(mode[0]).toBeGreaterThanOrEqual(0)
          expect(mode[1]).toBeGreaterThanOrEqual(0)
          const precision = inverse(V, 'V')
          const farness = (x: ArrayLike<number>): number =>
            quadratic(
              precision,
              m.map((value, i) => x[i] - value),
            )
          for (const other of others) expect(farness(mode)).toBeLessThanOrEqual(farness(other) + 1e-9)
          for (const step of [1e-3, -1e-3]) {
            for (let j = 0; j < 3; j++) {
              const near = mode.slice()
              near[j] = j < 2 ? Math.max(near[j] + step, 0) : near[j] + step
              expect(farness(mode)).toBeLessThanOrEqual(farness(near) + 1e-9)
            }
          }
        },
      ),
      { numRuns: 200 },
    )
  })

  it('is refused when its covariance is none', () => {
    expect(() => truncateAtZero(Float64Array.of(0, 0), pair(1.1), [true, true])).toThrowError(/covariance: row 1/)
  })
})
