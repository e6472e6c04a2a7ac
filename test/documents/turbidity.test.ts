import { describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { skyModel } from '../../server/documents/sky-model.ts'
import { skyDocument } from '../../server/documents/sky.ts'
import type { SkyInput } from '../../server/documents/sky.ts'
import { monthKnots } from '../../server/documents/turbidity.ts'
import { weatherAlong } from '../../server/engine/sky.ts'
import { sunPath } from '../../server/engine/sun.ts'
import { someSky } from '../support/scenario.ts'
import { budget, oneDay } from '../support/some-budget.ts'

/** Dry and clean in winter, dust in summer: invented, within the usual 2 to 8. */
const MONTHS = [5, 4.6, 4.2, 3.6, 3, 2.6, 2.4, 2.8, 3.4, 4, 5, 5.4]

/** Clear-sky beam at an instant, with turbidity as a column or by month. [W/m²] */
function beamWm2(at: string, change: (sky: SkyInput) => void, ofRace?: number[]): number {
  const stamps = ['00:00', '06:00', '12:00', '18:00'].map((time) => `${at.slice(0, 10)}T${time}:00+02:00`)
  const sky: SkyInput = {
    name: 'Clear',
    source: 'forecast',
    issuedAt: stamps[0],
    places: [
      {
        name: 'A',
        latDeg: -23,
        lonDeg: 17,
        elevationM: 0,
        at: stamps,
        airTempC: stamps.map(() => 20),
        cloudPct: [0, 0, 0, 0],
      },
    ],
  }
  change(sky)
  const atMs = Float64Array.of(Date.parse(at))
  const one = (value: number) => Float64Array.of(value)
  const along = { count: 1, atMs, latRad: one((-23 * Math.PI) / 180), lonRad: one((17 * Math.PI) / 180), altM: one(0) }
  return weatherAlong(skyModel(skyDocument.parse(sky), ofRace).sky, sunPath(atMs[0], atMs[0]), along).dniWm2[0]
}

const constant = (linke: number) => (sky: SkyInput) => {
  sky.places[0].turbidity = [linke, linke, linke, linke]
}
const byMonth = (sky: SkyInput) => {
  sky.turbidityByMonth = MONTHS
}

describe('turbidity by month', () => {
  test('stands in the middle of its month and changes evenly to the next', () => {
    // October has 31 days: its middle is the 16th, 12:00 UTC; November's is the 16th, 00:00, 30.5 days later; 1 November, 06:00, is 15.75 days on.
    const noon = '2026-10-16T12:00:00Z'
    expect(beamWm2(noon, byMonth)).toBeCloseTo(beamWm2(noon, constant(4)), 6)
    const between = '2026-11-01T06:00:00Z'
    expect(beamWm2(between, byMonth)).toBeCloseTo(beamWm2(between, constant(4 + 15.75 / 30.5)), 6)
  })
  test('goes over the turn of the year', () => {
    // December's middle is the 16th, 12:00; January's is the 16th, 12:00: 31 days from 5.4 to 5.
    const newYear = '2027-01-01T12:00:00Z'
    expect(beamWm2(newYear, byMonth)).toBeCloseTo(beamWm2(newYear, constant(5.4 - (0.4 * 16) / 31)), 6)
  })
  test('of a leap February stands a half day later', () => {
    const { atMs } = monthKnots(MONTHS, Date.UTC(2028, 1, 3), Date.UTC(2028, 1, 4))
    expect([...atMs].map((ms) => new Date(ms).toISOString())).toEqual([
      '2028-01-16T12:00:00.000Z',
      '2028-02-15T12:00:00.000Z',
      '2028-03-16T12:00:00.000Z',
    ])
  })
  test('gives way to a column, and the race’s to the sky’s', () => {
    const noon = '2026-10-16T12:00:00Z'
    const both = (sky: SkyInput) => {
      byMonth(sky)
      constant(2)(sky)
    }
    expect(beamWm2(noon, both)).toBe(beamWm2(noon, constant(2)))
    expect(beamWm2(noon, byMonth, Array(12).fill(8))).toBe(beamWm2(noon, byMonth))
    expect(beamWm2(noon, () => {}, MONTHS)).toBe(beamWm2(noon, byMonth))
    expect(beamWm2(noon, () => {})).toBeCloseTo(beamWm2(noon, constant(3)), 6)
  })
  test('takes more beam the thicker the air: 2 is clean, 8 is dust', () => {
    const beams = [2, 3, 4, 5, 8].map((linke) => beamWm2('2026-10-16T12:00:00Z', constant(linke)))
    expect(beams).toEqual([...beams].sort((a, b) => b - a))
  })
  test('is twelve numbers from 1 to 12', () => {
    const problemsOf = (turbidityByMonth: number[]) =>
      checkDocument(skyDocument, { ...someSky(), turbidityByMonth }).problems?.map(({ field, detail }) => [
        field,
        detail,
      ])
    expect(problemsOf(MONTHS.slice(1))).toEqual([['turbidityByMonth', 'expected at least 12 entries']])
    expect(problemsOf(MONTHS.with(3, 13))).toEqual([['turbidityByMonth[3]', 'expected at most 12']])
    expect(problemsOf(MONTHS)).toBeUndefined()
  })
  test('of the race is said where the sky brings none', () => {
    const said = budget((r) => {
      r.race.turbidityByMonth = MONTHS
    }).assumptions
    expect(said).toContain('The sky brings no turbidity: the race’s by month is taken.')
    expect(budget().assumptions).toContain('The sky brings no turbidity: Linke 3 is assumed.')
  })
})

describe('the light of the sky', () => {
  const inWh = (diffuse?: 'perez' | 'hay-davies') =>
    oneDay((r) => {
      r.sky.diffuse = diffuse
    }).ledger.cameInWh

  test('is spread by Perez unless the sky says Hay and Davies', () => {
    expect(inWh()).toBe(inWh('perez'))
    expect(inWh('hay-davies')).not.toBe(inWh('perez'))
    // The models differ by a few per cent on a tilted plane: common practice, no source.
    expect(Math.abs(inWh('hay-davies') / inWh('perez') - 1)).toBeLessThan(0.03)
  })
})
