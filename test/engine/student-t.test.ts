import { describe, expect, it } from 'vitest'
import { normalBelow, normalHazard, quantileT, tBelow } from '../../server/engine/student-t.ts'

/** Abramowitz & Stegun, table 26.10 (from memory, as in every printed table): one-sided shares. */
const TABLE: [number, number, number, number][] = [
  // dof, 0.95, 0.975, 0.995
  [1, 6.314, 12.706, 63.657],
  [2, 2.92, 4.303, 9.925],
  [3, 2.353, 3.182, 5.841],
  [5, 2.015, 2.571, 4.032],
  [6, 1.943, 2.447, 3.707],
  [10, 1.812, 2.228, 3.169],
  [20, 1.725, 2.086, 2.845],
  [30, 1.697, 2.042, 2.75],
  [60, 1.671, 2, 2.66],
  [120, 1.658, 1.98, 2.617],
  [Number.POSITIVE_INFINITY, 1.645, 1.96, 2.576],
]

describe("Student's t", () => {
  it.each(TABLE)('with %d degrees of freedom has the printed quantiles', (dof, at95, at975, at995) => {
    expect(Math.abs(quantileT(0.95, dof) - at95)).toBeLessThan(0.000_51)
    expect(Math.abs(quantileT(0.975, dof) - at975)).toBeLessThan(0.000_51)
    expect(Math.abs(quantileT(0.995, dof) - at995)).toBeLessThan(0.000_51)
  })

  it('with one degree of freedom is a Cauchy: tan(π(p − ½)); with two, closed too', () => {
    for (const p of [0.01, 0.3, 0.5, 0.6, 0.9, 0.999]) {
      expect(quantileT(p, 1)).toBeCloseTo(Math.tan(Math.PI * (p - 0.5)), 8)
      expect(quantileT(p, 2)).toBeCloseTo((2 * p - 1) / Math.sqrt(2 * p * (1 - p)), 9)
    }
  })

  it('gives back the share it was asked for, at any degrees of freedom', () => {
    for (const dof of [1, 2.5, 7, 43, 206, 5000, Number.POSITIVE_INFINITY]) {
      for (const p of [0.001, 0.2, 0.5, 0.8, 0.975]) expect(tBelow(quantileT(p, dof), dof)).toBeCloseTo(p, 11)
    }
  })

  it('refuses a share of one and no degrees of freedom', () => {
    expect(() => quantileT(1, 6)).toThrowError(/p: 1 given/)
    expect(() => quantileT(0.5, 0)).toThrowError(/dof: 0 given/)
    expect(() => quantileT(0.5, Number.NaN)).toThrowError(/dof: NaN given/)
  })
})

describe('the normal', () => {
  // Abramowitz & Stegun, table 26.1 and 26.2 (from memory).
  it.each([
    [0, 0.5],
    [1, 0.841_344_746_07],
    [1.96, 0.975_002_104_85],
    [3, 0.998_650_101_97],
    [-2, 0.022_750_131_95],
  ])('below %f has a share of %f', (x, share) => expect(normalBelow(x)).toBeCloseTo(share, 10))

  it('has 1 − Φ(5) = 2.866516e-7 and 1 − Φ(10) = 7.619853e-24 in its tails', () => {
    expect(normalBelow(-5) / 2.866_515_72e-7).toBeCloseTo(1, 8)
    expect(normalBelow(-10) / 7.619_853_02e-24).toBeCloseTo(1, 8)
  })

  it('is one curve where series and fraction meet', () => {
    for (const at of [-4, 4]) {
      expect(normalBelow(at + 1e-9) / normalBelow(at - 1e-9)).toBeCloseTo(1, 7)
      expect(normalHazard(at + 1e-9) / normalHazard(at - 1e-9)).toBeCloseTo(1, 7)
    }
  })

  it('has the hazard √(2/π) at its middle and nearly −x far below', () => {
    expect(normalHazard(0)).toBeCloseTo(Math.sqrt(2 / Math.PI), 12)
    expect(normalHazard(-50)).toBeCloseTo(50 + 1 / 50, 4)
    expect(normalHazard(40)).toBe(0)
  })
})
