import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { prepareSky, type SkyPlaceInput } from '../../server/engine/sky.ts'
import { compareAt, SKY_MEASURES, type SkyMeasure } from '../../server/engine/sky-compare.ts'
import { only, skyScore } from '../../server/engine/sky-score.ts'
import { DAY_START_MS, HOUR_MS, rowsOf, SALTPAN } from './sky-scenes.ts'

const RAD = Math.PI / 180
const HOURS = 24
const { fromMs, toMs } = rowsOf(HOURS, HOUR_MS)
const column = (of: (hour: number) => number): Float64Array => Float64Array.from({ length: HOURS }, (_, i) => of(i))

/** Hours of a day: light as means of the hours, the rest as of their ends. */
function table(columns: Partial<SkyPlaceInput>, place = SALTPAN): SkyPlaceInput {
  const ends = { fromMs: toMs, toMs }
  const intervalOf = { airC: ends, windMps: ends, windFromRad: ends, pressurePa: ends }
  return { ...place, fromMs, toMs, airC: column(() => 20), intervalOf, ...columns }
}

const side = (...places: SkyPlaceInput[]) => ({ places, sky: prepareSky({ places, linkeDefault: 3 }) })
/** Part of a clear day in October: sunrise near 04:35 UTC, sunset near 17:05; rows 5 to 16 are whole in the sun. */
const sunny = (share: number) =>
  column((h) => (h < 5 || h > 16 ? 0 : share * 950 * Math.sin(((h + 0.5 - 4.6) * Math.PI) / 12.5)))

function scoreOf(forecast: Partial<SkyPlaceInput>, measured: Partial<SkyPlaceInput>, measure: SkyMeasure) {
  const rows = compareAt(side(table(forecast)), side(table(measured)), 0).measures.get(measure)
  if (rows === undefined) throw new Error(`no ${measure}`)
  return skyScore(rows)
}

describe('a forecast beside what was measured', () => {
  it('is off by what a table by hand says', () => {
    // Errors of +2, 0, -3 and 0 in four of 24 hours: sum -1, of sizes 5, of squares 13.
    const errors = [2, 0, -3]
    const score = scoreOf({ airC: column((h) => 20 + (errors[h - 10] ?? 0)) }, {}, 'airC')
    expect(score).toMatchObject({ rows: 24, measuredMean: 20 })
    expect(score?.bias).toBeCloseTo(-1 / 24, 12)
    expect(score?.forecastMean).toBeCloseTo(20 - 1 / 24, 12)
    expect(score?.meanAbsoluteError).toBeCloseTo(5 / 24, 12)
    expect(score?.rms).toBeCloseTo(Math.sqrt(13 / 24), 12)
  })
  it('has its wind along and across the measured wind', () => {
    // Measured 4 m/s from the north; forecast 5 m/s from the east: nothing along it, 5 clockwise across it.
    const wind = (mps: number, fromDeg: number) => ({
      windMps: column(() => mps),
      windFromRad: column(() => fromDeg * RAD),
    })
    const measured = wind(4, 0)
    expect(scoreOf(wind(5, 90), measured, 'windMps')?.bias).toBeCloseTo(1, 12)
    expect(scoreOf(wind(5, 90), measured, 'windAlongMps')?.bias).toBeCloseTo(-4, 12)
    expect(scoreOf(wind(5, 90), measured, 'windAcrossMps')?.bias).toBeCloseTo(5, 12)
    expect(scoreOf(wind(5, 270), measured, 'windAcrossMps')?.bias).toBeCloseTo(-5, 12)
    // From 150° where 180° was measured: 5 cos 30° along, 5 sin 30° anticlockwise.
    expect(scoreOf(wind(5, 150), wind(5, 180), 'windAlongMps')?.forecastMean).toBeCloseTo(4.330127, 6)
    expect(scoreOf(wind(5, 150), wind(5, 180), 'windAcrossMps')?.bias).toBeCloseTo(-2.5, 12)
  })
  it('has no wind along or across what is calm', () => {
    const windMps = column((h) => (h < 12 ? 0.4 : 3))
    const measured = { windMps, windFromRad: column(() => 1) }
    expect(scoreOf(measured, measured, 'windAlongMps')?.rows).toBe(12)
    expect(scoreOf(measured, measured, 'windMps')?.rows).toBe(24)
  })
  it('gives the hours of light as the tables have them', () => {
    // The sum of the day is worked out from the tables alone.
    const [half, most] = [sunny(0.5), sunny(0.8)]
    const sum = (values: Float64Array) => values.reduce((a, b) => a + b, 0)
    const { global } = compareAt(side(table({ ghiWm2: half })), side(table({ ghiWm2: most })), 0)
    expect(global.weightS.every((weight) => weight === 3600)).toBe(true)
    expect(sum(global.forecast) / sum(half)).toBeCloseTo(1, 3)
    expect(sum(global.measured) / sum(most)).toBeCloseTo(1, 3)
  })
  it('counts light where there is sun, and only rows with a measured value that the forecast reaches', () => {
    const measured = { ghiWm2: sunny(0.5), airC: column((h) => (h === 12 ? Number.NaN : 20)) }
    const late = { ghiWm2: column((h) => (h < 10 ? Number.NaN : 300)), airC: column((h) => (h < 10 ? Number.NaN : 22)) }
    expect(scoreOf({ ghiWm2: sunny(0.6) }, measured, 'ghiWm2')?.rows).toBe(12)
    expect(scoreOf(late, measured, 'airC')).toMatchObject({ rows: 13, bias: 2 })
    const { global } = compareAt(side(table(late)), side(table(measured)), 0)
    expect(global.fromMs[0]).toBe(DAY_START_MS + 10 * HOUR_MS)
  })
  it('says what one of the two lacks', () => {
    expect(compareAt(side(table({})), side(table({ pressurePa: column(() => 90_000) })), 0).lacking).toEqual([
      'wind',
      'pressure',
    ])
    const never = compareAt(
      side(table({})),
      side({ ...table({}), intervalOf: {}, fromMs: fromMs.map((ms) => ms + 1e12), toMs: toMs.map((ms) => ms + 1e12) }),
      0,
    )
    expect(never.lacking).toEqual(['air', 'wind', 'pressure'])
    expect(never.measures.size).toBe(0)
  })
  it('is blended at the measured place from the forecast’s places', () => {
    const north = { ...SALTPAN, latRad: SALTPAN.latRad + 0.2 * RAD }
    const south = { ...SALTPAN, latRad: SALTPAN.latRad - 0.2 * RAD }
    const forecast = side(table({ airC: column(() => 24) }, north), table({ airC: column(() => 20) }, south))
    const bias = (place: typeof SALTPAN) => {
      const rows = compareAt(forecast, side(table({ airC: column(() => 20) }, place)), 0).measures.get('airC')
      return rows === undefined ? null : skyScore(rows)?.bias
    }
    expect(bias(SALTPAN)).toBeCloseTo(2, 9)
    expect(bias(north)).toBeCloseTo(4, 6)
    expect(bias(south)).toBeCloseTo(0, 6)
  })
  it('is scored by the length of its rows, and in part', () => {
    const rows = {
      fromMs: Float64Array.of(0, 1, 2),
      toMs: Float64Array.of(1, 2, 3),
      weightS: Float64Array.of(600, 600, 1800),
      forecast: Float64Array.of(2, 4, 6),
      measured: Float64Array.of(1, 4, 8),
    }
    // (600·1 + 600·0 - 1800·2)/3000 = -1; sizes (600 + 3600)/3000; squares (600 + 7200)/3000.
    expect(skyScore(rows)).toMatchObject({ rows: 3, bias: -1, meanAbsoluteError: 1.4 })
    expect(skyScore(rows)?.rms).toBeCloseTo(Math.sqrt(2.6), 12)
    expect(skyScore(rows, (row) => row < 2)).toMatchObject({ rows: 2, bias: 0.5, forecastMean: 3 })
    expect(skyScore(only(rows, () => false))).toBeNull()
  })
})

describe('comparing any two skies', () => {
  const anyTable = fc
    .record({
      ghi: fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { minLength: HOURS, maxLength: HOURS }),
      air: fc.array(fc.double({ min: -10, max: 45, noNaN: true }), { minLength: HOURS, maxLength: HOURS }),
      wind: fc.array(fc.double({ min: 1, max: 15, noNaN: true }), { minLength: HOURS, maxLength: HOURS }),
      from: fc.double({ min: 0, max: 6, noNaN: true }),
      hPa: fc.double({ min: 800, max: 950, noNaN: true }),
    })
    .map(({ ghi, air, wind, from, hPa }) =>
      table({
        ghiWm2: sunny(1).map((value, i) => value * ghi[i]),
        airC: Float64Array.from(air),
        windMps: Float64Array.from(wind),
        windFromRad: column(() => from),
        pressurePa: column(() => hPa * 100),
      }),
    )
  const compared = (forecast: SkyPlaceInput, measured: SkyPlaceInput) =>
    compareAt(side(forecast), side(measured), 0).measures

  it('gives zeros for a sky beside itself', () => {
    fc.assert(
      fc.property(anyTable, (sky) => {
        const measures = compared(sky, sky)
        expect([...measures.keys()].sort()).toEqual([...SKY_MEASURES].sort())
        for (const [measure, rows] of measures) {
          const score = skyScore(rows)
          expect(Math.abs(score?.bias ?? 1)).toBeLessThan(1e-12)
          if (measure !== 'windAlongMps' && measure !== 'windAcrossMps') expect(score?.rms).toBe(0)
        }
      }),
      { numRuns: 40, seed: 5 },
    )
  })
  it('turns its sign when the two change places', () => {
    fc.assert(
      fc.property(anyTable, anyTable, (a, b) => {
        const [one, other] = [compared(a, b), compared(b, a)]
        for (const measure of [
          'ghiWm2',
          'dniWm2',
          'dhiWm2',
          'clearSkyIndex',
          'airC',
          'windMps',
          'pressurePa',
        ] as const) {
          const [there, back] = [one, other].map((measures) => {
            const rows = measures.get(measure)
            return rows === undefined ? null : skyScore(rows)
          })
          expect(there?.bias).toBe(-(back?.bias ?? Number.NaN) + 0)
          expect(there?.rms).toBe(back?.rms)
        }
      }),
      { numRuns: 40, seed: 6 },
    )
  })
  it('finds a shift by a constant', () => {
    fc.assert(
      fc.property(anyTable, fc.double({ min: 0.1, max: 5, noNaN: true }), (sky, shift) => {
        const moved = {
          ...sky,
          airC: sky.airC?.map((value) => value + shift),
          windMps: sky.windMps?.map((value) => value + shift),
          pressurePa: sky.pressurePa?.map((value) => value + shift),
        }
        const measures = compared(moved, sky)
        for (const measure of ['airC', 'windMps', 'pressurePa', 'windAlongMps'] as const) {
          const rows = measures.get(measure)
          const score = rows === undefined ? null : skyScore(rows)
          expect(score?.bias).toBeCloseTo(shift, 6)
          expect(score?.rms).toBeCloseTo(shift, 6)
        }
      }),
      { numRuns: 40, seed: 7 },
    )
  })
})
