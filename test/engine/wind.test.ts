import { describe, expect, it } from 'vitest'
import { crosswindMps, headwindMps, windAtCarMps, windShareAtCar } from '../../server/engine/wind.ts'

const rad = (deg: number): number => (deg * Math.PI) / 180

describe('wind along and across the road, worked by hand', () => {
  it.each([
    [180, 5, 0],
    [0, -5, 0],
    [90, 0, 5],
    [270, 0, -5],
    [150, 4.330_127, 2.5],
  ])('5 m/s from the south on heading %i°: %f against, %f from the right', (headingDeg, head, cross) => {
    expect(headwindMps(5, rad(180), rad(headingDeg))).toBeCloseTo(head, 6)
    expect(crosswindMps(5, rad(180), rad(headingDeg))).toBeCloseTo(cross, 6)
  })
})

describe('wind at half a metre over wind at ten', () => {
  // ln(0.5/z0)/ln(10/z0) by pocket calculator; roughness classes from a wind-power library's table.
  it.each([
    [0.005, 0.606],
    [0.03, 0.484],
    [0.1, 0.349],
  ])('roughness %f m leaves %f', (roughnessM, share) => {
    expect(windShareAtCar(roughnessM, 0.5)).toBeCloseTo(share, 3)
    expect(windAtCarMps(6, roughnessM, 0.5)).toBeCloseTo(6 * windShareAtCar(roughnessM, 0.5), 12)
  })

  it('is all of it at ten metres', () => expect(windShareAtCar(0.03, 10)).toBe(1))

  it.each([
    ['roughnessM', 0, 0.5],
    ['roughnessM', 10, 0.5],
    ['carHeightM', 0.6, 0.5],
    ['carHeightM', 0.03, 11],
    ['carHeightM', 0.03, Number.NaN],
  ])('an impossible %s is refused: %f, %f', (field, roughnessM, carHeightM) => {
    expect(() => windShareAtCar(roughnessM, carHeightM)).toThrowError(expect.objectContaining({ field }))
  })
})
