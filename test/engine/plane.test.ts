import { describe, expect, it } from 'vitest'
import {
  groundWm2,
  hayDavies,
  hayDaviesWm2,
  panelNormal,
  perez,
  perezWm2,
  type SkyLight,
} from '../../server/engine/plane.ts'
import { referenceRows } from '../support/reference.ts'

const RAD = Math.PI / 180
const ROWS = referenceRows('plane.csv').map((row) =>
  Object.fromEntries(Object.entries(row).map(([key, text]) => [key, Number(text)])),
)
const skyOf = (row: Record<string, number>): SkyLight => ({
  dniWm2: row.dni,
  dhiWm2: row.dhi,
  extraWm2: row.dni_extra,
  airMass: row.am_rel,
  apparentZenithRad: row.app_zenith_deg * RAD,
  cosZenith: Math.cos(row.app_zenith_deg * RAD),
})
const shares = { aroundSunWm2: 0, domeWm2: 0, horizonWm2: 0 }
/** Relative 1e-7, or half a unit of the table's twelfth digit on values near nothing. */
const near = (got: number, want: number, what: string): void =>
  expect(Math.abs(got - want), `${what}: ${got} against ${want}`).toBeLessThanOrEqual(1e-7 * Math.abs(want) + 1e-8)

describe('light on a tilted plane', () => {
  // Source: test/reference/plane.csv, computed by the independent library that its head names.
  it('gives the sky by Hay–Davies and Perez, and the ground, as 300 tabulated planes have them', () => {
    let counted = 0
    for (const row of ROWS) {
      const sky = skyOf(row)
      const cosTilt = Math.cos(row.tilt_deg * RAD)
      near(hayDaviesWm2(sky, row.cos_aoi, cosTilt), row.sky_haydavies, `case ${row.case} Hay–Davies`)
      near(perezWm2(sky, row.cos_aoi, cosTilt), row.sky_perez, `case ${row.case} Perez`)
      near(groundWm2(row.ghi, row.albedo, cosTilt), row.ground, `case ${row.case} ground`)
      near(Math.max(0, row.dni * row.cos_aoi), row.beam, `case ${row.case} beam`)
      counted++
    }
    expect(counted).toBe(300)
  })

  it('splits the sky into the same parts as the tabulated planes', () => {
    for (const row of ROWS) {
      const cosTilt = Math.cos(row.tilt_deg * RAD)
      hayDavies(skyOf(row), shares)
      near(shares.domeWm2 * 0.5 * (1 + cosTilt), row.hd_isotropic, `case ${row.case} dome`)
      near(shares.aroundSunWm2 * Math.max(0, row.cos_aoi), row.hd_circumsolar, `case ${row.case} around the sun`)
      perez(skyOf(row), shares)
      near(shares.domeWm2 * 0.5 * (1 + cosTilt), row.pz_isotropic, `case ${row.case} Perez dome`)
      near(shares.aroundSunWm2 * Math.max(0, row.cos_aoi), row.pz_circumsolar, `case ${row.case} Perez around the sun`)
      near(shares.horizonWm2 * Math.sin(row.tilt_deg * RAD), row.pz_horizon, `case ${row.case} Perez horizon`)
    }
  })

  // Source: published tests of pvlib-python (snapshot 6382338), surface tilted 40° to the south.
  it('meets the published planes of 40° to the south', () => {
    const tilt = 40 * RAD
    const cosIncidence = (zenith: number, azimuth: number): number =>
      Math.cos(tilt) * Math.cos(zenith * RAD) +
      Math.sin(tilt) * Math.sin(zenith * RAD) * Math.cos((azimuth - 180) * RAD)
    const first = { dniWm2: 939.95469881, dhiWm2: 118.45831879, zenith: 10.56413562, azimuth: 144.76567754 }
    const second = { dniWm2: 646.22886049, dhiWm2: 62.03376265, zenith: 72.41687122, azimuth: 287.04104128 }
    const sky = (given: typeof first): SkyLight => ({
      ...given,
      extraWm2: 1321.1655834833093,
      airMass: given === first ? 1.01688136 : 3.26,
      apparentZenithRad: given.zenith * RAD,
      cosZenith: Math.cos(given.zenith * RAD),
    })
    const hay = (given: typeof first): number =>
      hayDaviesWm2(sky(given), cosIncidence(given.zenith, given.azimuth), Math.cos(tilt))
    expect(Math.abs(hay(first) - 102.995)).toBeLessThan(1e-3)
    expect(Math.abs(hay(second) - 33.191)).toBeLessThan(1e-3)
    const byPerez = perezWm2(sky(first), cosIncidence(first.zenith, first.azimuth), Math.cos(tilt))
    expect(Math.abs(byPerez - 109.0843)).toBeLessThan(2e-4)
    expect(Math.abs(groundWm2(900, 0.25, Math.cos(tilt)) - 26.32)).toBeLessThan(0.005)
  })

  it('gives exactly nothing without diffuse light', () => {
    const dark = { dniWm2: 0, dhiWm2: 0, extraWm2: 1366, airMass: 38, apparentZenithRad: 2, cosZenith: Math.cos(2) }
    expect(hayDaviesWm2(dark, 0.3, 0.9)).toBe(0)
    expect(perezWm2(dark, 0.3, 0.9)).toBe(0)
  })
})

describe('where a panel faces', () => {
  const facing = (pitch: number, roll: number, heading: number, grade = 0): number[] =>
    panelNormal(pitch * RAD, roll * RAD, heading * RAD, grade * RAD)
  const expectFacing = (got: number[], want: number[]): void =>
    got.forEach((part, i) => expect(part).toBeCloseTo(want[i], 12))
  const s = Math.sin(10 * RAD)
  const c = Math.cos(10 * RAD)

  // Source: by hand, a car heading east (x east, y north, z up).
  it('tips forward with pitch, right with roll, and back on a climb', () => {
    expectFacing(facing(0, 0, 90), [0, 0, 1])
    expectFacing(facing(10, 0, 90), [s, 0, c])
    expectFacing(facing(0, 10, 90), [0, -s, c])
    expectFacing(facing(0, 0, 90, 10), [-s, 0, c])
    expectFacing(facing(10, 0, 90, 10), [0, 0, 1])
    expectFacing(facing(0, 10, 0), [s, 0, c])
  })

  // Source: test/reference/chain.csv, tilt and azimuth of three panels on a car that changes its heading.
  it('agrees with the tabulated tilt and azimuth of three panels through a day', () => {
    const PANELS = [
      ['deck', 0, 0],
      ['nose', 8, 0],
      ['tail', -6, 3],
    ] as const
    let counted = 0
    for (const row of referenceRows('chain.csv')) {
      for (const [name, pitch, roll] of PANELS) {
        const tilt = Number(row[`${name}_tilt_deg`]) * RAD
        const azimuth = Number(row[`${name}_az_deg`]) * RAD
        const want = [Math.sin(tilt) * Math.sin(azimuth), Math.sin(tilt) * Math.cos(azimuth), Math.cos(tilt)]
        facing(pitch, roll, Number(row.heading_deg)).forEach((part, i) => expect(part).toBeCloseTo(want[i], 11))
        counted++
      }
    }
    expect(counted).toBe(3 * 661)
  })
})
