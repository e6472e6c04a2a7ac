import { describe, expect, it } from 'vitest'
import { absoluteAirMass, clearSkyWm2, relativeAirMass } from '../../server/engine/clear-sky.ts'
import { extraterrestrialWm2, refractionRad, trueSun } from '../../server/engine/sun.ts'
import { referenceRows, referenceText } from '../support/reference.ts'

const RAD = Math.PI / 180
const relative = (value: number, expected: number): number => Math.abs(value / expected - 1)

describe('air mass', () => {
  // Kasten & Young 1989, Applied Optics 28, 4735: table II; the formula departs from it by up to 0.5 %
  it.each([
    [0, 38.0868],
    [1, 26.2595],
    [5, 10.3164],
    [10, 5.5841],
  ])('at %s degrees altitude is the paper’s %s within 0.5 %%', (altitudeDeg, expected) => {
    expect(relative(relativeAirMass((90 - altitudeDeg) * RAD), expected)).toBeLessThan(5e-3)
  })

  // the formula's own values: pvlib-python's tests (z 80, 89.9), computed (z 90)
  it.each([
    [80, 5.586, 3],
    [89.9, 36.467, 3],
    [90, 37.92, 2],
  ])('at zenith %s degrees is the formula’s %s', (zenithDeg, expected, digits) => {
    expect(relativeAirMass(zenithDeg * RAD)).toBeCloseTo(expected, digits)
  })

  it('stays at the horizon’s value for a sun below it', () => {
    expect(relativeAirMass(100 * RAD)).toBe(relativeAirMass(Math.PI / 2))
  })
})

describe('the clear sky', () => {
  // pvlib-python's tests of Ineichen & Perez 2002, Linke turbidity 3, 1364 W/m² above the air
  it.each([
    { zenithDeg: 10, airMass: 1, altM: 0, ghi: 1038.159, dni: 942.208, dhi: 110.265 },
    { zenithDeg: 10, airMass: 1, altM: 2000, ghi: 1134.243, dni: 994.954, dhi: 154.405 },
    { zenithDeg: 72.4169, airMass: 3.01614, altM: 0, ghi: 251.994, dni: 655.449, dhi: 53.99 },
  ])(
    'has the published irradiance at zenith $zenithDeg, height $altM m',
    ({ zenithDeg, airMass, altM, ...expected }) => {
      const clear = clearSkyWm2({ apparentZenithRad: zenithDeg * RAD, airMass, linke: 3, altM, extraWm2: 1364 })
      expect(relative(clear.ghi, expected.ghi)).toBeLessThan(1e-5)
      expect(relative(clear.dni, expected.dni)).toBeLessThan(1e-5)
      expect(relative(clear.dhi, expected.dhi)).toBeLessThan(1e-5)
    },
  )

  it('gives nothing once the sun is down', () => {
    const down = { apparentZenithRad: 91 * RAD, airMass: 38, linke: 3, altM: 0, extraWm2: 1364 }
    expect(clearSkyWm2(down)).toEqual({ ghi: 0, dni: 0, dhi: 0 })
  })

  it('and air mass agree with every row of the reference table within 1e-8', () => {
    // test/reference/sky.csv: pvlib-python 0.11.2, fed the table's own zenith, air mass, turbidity and height
    const rows = referenceRows('sky.csv').map((row) =>
      Object.fromEntries(Object.entries(row).map(([name, text]) => [name, Number(text)])),
    )
    let light = 0
    for (const row of rows) {
      const apparentZenithRad = row.app_zenith_deg * RAD
      const clear = clearSkyWm2({
        apparentZenithRad,
        airMass: row.am_abs,
        linke: row.linke,
        altM: row.alt_m,
        extraWm2: row.dni_extra,
      })
      if (!(row.app_zenith_deg < 90)) {
        expect(clear.ghi, `row ${row.id}`).toBe(0)
        continue
      }
      light++
      const airMass = relativeAirMass(apparentZenithRad)
      expect(relative(airMass, row.am_rel), `row ${row.id}`).toBeLessThan(1e-8)
      expect(relative(absoluteAirMass(row.am_rel, row.pressure_pa), row.am_abs), `row ${row.id}`).toBeLessThan(1e-8)
      expect(relative(clear.ghi, row.ineichen_ghi), `row ${row.id}`).toBeLessThan(1e-8)
      expect(relative(clear.dni, row.ineichen_dni), `row ${row.id}`).toBeLessThan(1e-8)
      expect(relative(clear.dhi, row.ineichen_dhi), `row ${row.id}`).toBeLessThan(1e-8)
    }
    expect(rows.length).toBe(179)
    expect(light).toBe(rows.filter((row) => row.app_zenith_deg < 90).length)
    expect(light).toBeGreaterThan(100)
  })
})

describe('NOAA’s measured clear day', () => {
  // SURFRAD Alamosa, 2317 m, 2016-01-01 (Augustine et al. 2000, BAMS 81, 2341); one-minute means, stamp at their end
  const minutes = referenceText('surfrad-slv16001.dat')
    .trim()
    .split('\n')
    .slice(2)
    .map((line) => line.trim().split(/\s+/).map(Number))
    .filter((cells) => cells[7] < 80)
    .map((cells) => {
      const atMs = Date.UTC(cells[0], cells[2] - 1, cells[3], cells[4], cells[5]) - 30_000
      const { altitudeRad } = trueSun(atMs, 37.7 * RAD, -105.92 * RAD)
      const pressurePa = cells[46] * 100
      const apparentZenithRad = Math.PI / 2 - altitudeRad - refractionRad(altitudeRad, pressurePa, cells[38])
      const airMass = absoluteAirMass(relativeAirMass(apparentZenithRad), pressurePa)
      const extraWm2 = extraterrestrialWm2(atMs)
      const clear = clearSkyWm2({ apparentZenithRad, airMass, linke: 2, altM: 2317, extraWm2 })
      return { clear, ghi: cells[8], dni: cells[12] }
    })

  it('has the clear sky’s beam in every minute within 4 % at turbidity 2', () => {
    expect(minutes.length).toBe(445)
    for (const { clear, dni } of minutes) expect(relative(clear.dni, dni)).toBeLessThan(0.04)
  })

  it('has the clear sky’s global sum within 5 % at turbidity 2', () => {
    const sum = (values: number[]): number => values.reduce((total, value) => total + value, 0)
    const modelled = sum(minutes.map(({ clear }) => clear.ghi))
    expect(relative(modelled, sum(minutes.map(({ ghi }) => ghi)))).toBeLessThan(0.05)
  })
})
