import * as Astronomy from 'astronomy-engine'
import { describe, expect, it } from 'vitest'
import { type Along, extraterrestrialWm2, refractionRad, sunAlong, sunPath, trueSun } from '../../server/engine/sun.ts'
import { referenceRows, referenceText } from '../support/reference.ts'

const RAD = Math.PI / 180
const HOUR_MS = 3_600_000

/** Difference of two directions in degrees, the short way round. */
const turnDeg = (a: number, b: number): number => ((((a - b) % 360) + 540) % 360) - 180

describe('the sun stands where Reda & Andreas put it', () => {
  // NREL/TP-560-34302, table A5.1, as printed in test/reference/spa_example.csv
  const sun = trueSun(Date.UTC(2003, 9, 17, 19, 30, 30), 39.742476 * RAD, -105.1786 * RAD)
  const example = Object.fromEntries(referenceRows('spa_example.csv').map((row) => [row.quantity, row.published_deg]))

  it('in the worked example, refracted by its own air', () => {
    const apparentDeg = (sun.altitudeRad + refractionRad(sun.altitudeRad, 82_000, 11)) / RAD
    expect(90 - apparentDeg).toBeCloseTo(Number(example['zenith (refracted)']), 2)
    expect(Math.abs(sun.azimuthRad / RAD - Number(example.azimuth))).toBeLessThan(0.005)
  })

  it('with the refraction it prints, 0.016332 degrees', () => {
    expect(refractionRad(39.872046 * RAD, 82_000, 11) / RAD).toBeCloseTo(0.016332, 6)
  })
})

describe.each(['solpos.csv', 'solpos_bands.csv'])('the sun agrees with NREL SPA in %s', (file) => {
  const rows = referenceRows(file).map((row) => {
    const sun = trueSun(Number(row.unix_ms), Number(row.lat_deg) * RAD, Number(row.lon_deg) * RAD)
    const altitudeDeg = Number(row.elevation_deg)
    const lift = refractionRad(altitudeDeg * RAD, Number(row.pressure_pa), Number(row.temp_c)) / RAD
    return {
      altitudeDeg,
      above: sun.altitudeRad / RAD - altitudeDeg,
      altitudeError: Math.abs(sun.altitudeRad / RAD - altitudeDeg),
      azimuthError: Math.abs(turnDeg(sun.azimuthRad / RAD, Number(row.azimuth_deg)) * Math.cos(altitudeDeg * RAD)),
      liftError: Math.abs(lift - (Number(row.app_elevation_deg) - altitudeDeg)),
    }
  })
  const worst = (of: number[]): number => of.reduce((most, one) => Math.max(most, one), 0)

  it('in every row', () => {
    expect(rows.length).toBe({ 'solpos.csv': 200, 'solpos_bands.csv': 500 }[file])
  })

  it('in true altitude within 0.02 degrees', () => {
    expect(worst(rows.map((row) => row.altitudeError))).toBeLessThan(0.02)
  })

  it('on average in altitude within 0.001 degrees, so that parallax (0.0024 degrees) is in it', () => {
    const mean = rows.reduce((sum, row) => sum + row.above, 0) / rows.length
    expect(Math.abs(mean)).toBeLessThan(0.001)
  })

  it('in azimuth times the cosine of altitude within 0.015 degrees', () => {
    expect(worst(rows.map((row) => row.azimuthError))).toBeLessThan(0.015)
  })

  it('in refraction by local air within 0.01 degrees above 5 degrees, and closer at any altitude', () => {
    const high = rows.filter((row) => row.altitudeDeg > 5)
    expect(high.length).toBeGreaterThan(100)
    expect(worst(high.map((row) => row.liftError))).toBeLessThan(0.01)
    expect(worst(rows.map((row) => row.liftError))).toBeLessThan(1e-6)
  })
})

it('the sun agrees with astronomy-engine over years, seasons and latitudes', () => {
  let cases = 0
  let worstDeg = 0
  for (let year = 2020; year <= 2040; year += 5)
    for (let day = 0; day < 360; day += 23)
      for (const latDeg of [-66, -23, 0, 38, 70]) {
        const atMs = Date.UTC(year, 0, 1 + day, (day * 7) % 24, 13)
        const sun = trueSun(atMs, latDeg * RAD, 0.3)
        const observer = new Astronomy.Observer(latDeg, 0.3 / RAD, 0)
        const seen = Astronomy.Equator(Astronomy.Body.Sun, new Date(atMs), observer, true, true)
        const truth = Astronomy.Horizon(new Date(atMs), observer, seen.ra, seen.dec)
        const aside = turnDeg(sun.azimuthRad / RAD, truth.azimuth) * Math.cos(sun.altitudeRad)
        worstDeg = Math.max(worstDeg, Math.hypot(sun.altitudeRad / RAD - truth.altitude, aside))
        cases++
      }
  expect(cases).toBe(400)
  expect(worstDeg).toBeLessThan(0.016)
})

it("the sun's zenith agrees with NOAA's measured day 30 s before each stamp, in standard air", () => {
  // SURFRAD Alamosa, 2016-01-01 (Augustine et al. 2000, BAMS 81, 2341); zenith as printed, to 0.01 degrees
  const lines = referenceText('surfrad-slv16001.dat').trim().split('\n').slice(2)
  let worstDeg = 0
  for (const line of lines) {
    const cells = line.trim().split(/\s+/).map(Number)
    const atMs = Date.UTC(cells[0], cells[2] - 1, cells[3], cells[4], cells[5]) - 30_000
    const { altitudeRad } = trueSun(atMs, 37.7 * RAD, -105.92 * RAD)
    const zenithDeg = 90 - (altitudeRad + refractionRad(altitudeRad, 101_325, 10)) / RAD
    if (altitudeRad > -0.8 * RAD) worstDeg = Math.max(worstDeg, Math.abs(zenithDeg - cells[7]))
  }
  expect(lines.length).toBe(1440)
  expect(worstDeg).toBeLessThan(0.03)
})

describe("the sun's path", () => {
  const drive = (count: number, fromMs: number): Along => {
    const steps = Float64Array.from({ length: count }, (_, i) => i)
    return {
      count,
      atMs: steps.map((i) => fromMs + i * 61_000),
      latRad: steps.map((i) => Math.sin(i / 300) * 1.4),
      lonRad: steps.map((i) => -3.1 + i / 500),
      altM: new Float64Array(count),
    }
  }

  it('gives the true sun within 1e-7 rad by day and night, from pole to pole', () => {
    const along = drive(3000, Date.UTC(2026, 9, 14))
    const sun = sunAlong(sunPath(along.atMs[0], along.atMs[along.count - 1]), along)
    let worst = 0
    for (let i = 0; i < along.count; i++) {
      const { altitudeRad, azimuthRad } = trueSun(along.atMs[i], along.latRad[i], along.lonRad[i])
      const flat = Math.cos(altitudeRad)
      const east = sun.east[i] - flat * Math.sin(azimuthRad)
      const north = sun.north[i] - flat * Math.cos(azimuthRad)
      worst = Math.max(worst, Math.hypot(east, north, sun.up[i] - Math.sin(altitudeRad)))
      expect(Math.hypot(sun.east[i], sun.north[i], sun.up[i])).toBeCloseTo(1, 7)
    }
    expect(worst).toBeLessThan(1e-7)
  })

  it('covers a single instant', () => {
    const along = drive(1, Date.UTC(2026, 9, 14, 10))
    const sun = sunAlong(sunPath(along.atMs[0], along.atMs[0]), along)
    expect(sun.up[0]).toBeCloseTo(Math.sin(trueSun(along.atMs[0], along.latRad[0], along.lonRad[0]).altitudeRad), 7)
  })

  it('refuses a step outside itself and a span that runs backwards, by name', () => {
    const along = drive(10, 0)
    expect(() => sunAlong(sunPath(0, HOUR_MS / 60), along)).toThrow(/along\.atMs\[1\]: is 61000/)
    expect(() => sunAlong(sunPath(0, HOUR_MS), { ...along, atMs: along.atMs.fill(Number.NaN) })).toThrow(/NaN/)
    expect(() => sunPath(5, 4)).toThrow(/toMs: is 4, expected an instant not before 5/)
    expect(() => trueSun(0, Number.NaN, 0)).toThrow(/latRad: is NaN/)
  })
})

it('irradiance above the air follows Spencer for the UTC day, leap years included', () => {
  const rows = referenceRows('sky.csv')
  for (const row of rows) {
    const expected = Number(row.dni_extra)
    expect(Math.abs(extraterrestrialWm2(Date.parse(row.utc)) / expected - 1), row.id).toBeLessThan(1e-9)
  }
  expect(rows.length).toBe(179)
})
