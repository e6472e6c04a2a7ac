import geographiclib from 'geographiclib-geodesic'
import { describe, expect, it } from 'vitest'
import { bearingRad, cumulativeM, geodesicM, turnRad } from '../../server/engine/geodesic.ts'

// Reference: Karney's geodesics, geographiclib-geodesic 2.2.0.
const wgs84 = geographiclib.Geodesic.WGS84
const rad = (deg: number): number => (deg * Math.PI) / 180

/** Places on all latitudes and azimuths: the ends and the middle bearing of a geodesic of this length. */
function* lines(lengthM: number, latMaxDeg: number) {
  for (let lat = -latMaxDeg; lat <= latMaxDeg; lat += 7.3) {
    for (let azimuth = 0; azimuth < 360; azimuth += 11) {
      const lon = -180 + ((lat * 37 + azimuth * 13) % 180)
      const { lat2, lon2 } = wgs84.Direct(lat, lon, azimuth, lengthM)
      const middle = wgs84.Direct(lat, lon, azimuth, lengthM / 2).azi2
      yield { lat, lon, lat2: Number(lat2), lon2: Number(lon2), middle: Number(middle) }
    }
  }
}

describe('lengths against an independent library', () => {
  it.each([
    [1, 1e-8], // what a longitude in degrees keeps of a metre
    [100, 1e-10],
    [1000, 2e-11],
    [10_000, 1e-9],
    [50_000, 2e-8],
    [200_000, 3e-7],
    [1_000_000, 8e-6],
  ])('%i m are right to %f of the length', (lengthM, tolerance) => {
    let count = 0
    for (const { lat, lon, lat2, lon2 } of lines(lengthM, 89.9)) {
      const ours = geodesicM(rad(lat), rad(lon), rad(lat2), rad(lon2))
      expect(Math.abs(ours / lengthM - 1)).toBeLessThan(tolerance)
      count++
    }
    expect(count).toBe(25 * 33)
  })

  it('across the date line and the pole', () => {
    const { s12: byDateLine } = wgs84.Inverse(-17, 179.9, -17.1, -179.9)
    expect(geodesicM(rad(-17), rad(179.9), rad(-17.1), rad(-179.9)) / Number(byDateLine)).toBeCloseTo(1, 8)
    const { s12: overPole } = wgs84.Inverse(89.9, 10, 89.8, -170)
    expect(geodesicM(rad(89.9), rad(10), rad(89.8), rad(-170)) / Number(overPole)).toBeCloseTo(1, 6)
  })
})

describe('bearings against an independent library', () => {
  it.each([
    [1000, 1e-6],
    [50_000, 0.0013],
  ])('of the middle of %i m are right to %f°, below 60° of latitude', (lengthM, toleranceDeg) => {
    for (const { lat, lon, lat2, lon2, middle } of lines(lengthM, 59)) {
      const ours = bearingRad(rad(lat), rad(lon), rad(lat2), rad(lon2))
      expect(ours).toBeGreaterThanOrEqual(0)
      expect(Math.abs(turnRad(rad(middle), ours))).toBeLessThan(rad(toleranceDeg))
    }
  })
})

it('a way grows by each step and stands still at a repeated point', () => {
  const latRad = Float64Array.of(0.5, 0.5, 0.501, 0.501)
  const lonRad = Float64Array.of(1, 1, 1, 1)
  const wayM = cumulativeM({ latRad, lonRad })
  expect([wayM[0], wayM[1]]).toEqual([0, 0])
  expect(wayM[2]).toBe(geodesicM(0.5, 1, 0.501, 1))
  expect(wayM[3]).toBe(wayM[2])
})

it('the shortest turn crosses the date line', () => {
  expect(turnRad(3.1, -3.1)).toBeCloseTo(2 * Math.PI - 6.2, 12)
  expect(turnRad(-3.1, 3.1)).toBeCloseTo(6.2 - 2 * Math.PI, 12)
  expect(turnRad(0.1, 0.3)).toBeCloseTo(0.2, 12)
})
