import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { prepareSky, type SkyPlaceInput } from '../../server/engine/sky.ts'
import { DAY_START_MS, HOUR_MS, middles, rowsOf, SALTPAN, weatherAt } from './sky-scenes.ts'

const HOURS = rowsOf(24, HOUR_MS)
const filled = (count: number, value: number): Float64Array => new Float64Array(count).fill(value)

describe('a sky that cannot be true is refused by name', () => {
  const ghiWm2 = filled(24, 100)
  it.each<[string, Partial<SkyPlaceInput>, RegExp]>([
    ['kilowatts taken for watts', { ghiWm2: filled(24, 5000) }, /places\[0\]\.ghiWm2\[0\]: is 5000, expected/],
    ['endless', { airC: filled(24, Number.POSITIVE_INFINITY) }, /airC\[0\]: is Infinity/],
    ['nothing but gaps', { airC: filled(24, Number.NaN) }, /airC: holds no number/],
    ['cloud in percent', { cloudFraction: filled(24, 40) }, /cloudFraction\[0\]: is 40, expected a number from 0 to 1/],
    ['DNI alone', { dniWm2: ghiWm2 }, /dniWm2: stands alone/],
    ['DHI alone', { dhiWm2: ghiWm2 }, /dhiWm2: stands alone/],
    ['wind without direction', { windMps: filled(24, 3) }, /windFromRad: is missing/],
    ['fewer rows than times', { ghiWm2: filled(23, 3) }, /fromMs: has 24 and toMs 24 rows, expected 23/],
    ['rows out of order', { ghiWm2, fromMs: HOURS.fromMs.toReversed(), toMs: HOURS.toMs.toReversed() }, /fromMs\[1\]/],
    ['a row that ends before it starts', { ghiWm2, toMs: HOURS.fromMs.map((at) => at - 1) }, /toMs\[0\]: is/],
    ['a place off the earth', { latRad: 2 }, /places\[0\]\.latRad: is 2/],
  ])('%s', (_, wrong, message) => {
    expect(() => prepareSky({ places: [{ ...SALTPAN, ...HOURS, ...wrong }], linkeDefault: 3 })).toThrow(message)
  })

  it('no place, or no turbidity', () => {
    expect(() => prepareSky({ places: [], linkeDefault: 3 })).toThrow(/places: is empty/)
    expect(() => prepareSky({ places: [{ ...SALTPAN, ...HOURS }], linkeDefault: 0 })).toThrow(/linkeDefault: is 0/)
  })
})

it('no NaN leaves any sky, by day, at night, or beyond the table', () => {
  const hole = fc.constant(Number.NaN)
  const column = (low: number, high: number) =>
    fc.option(
      fc
        .array(fc.oneof(fc.double({ min: low, max: high, noNaN: true }), hole), { minLength: 24, maxLength: 24 })
        .filter((values) => values.some((value) => !Number.isNaN(value)))
        .map((values) => Float64Array.from(values)),
      { nil: undefined },
    )
  const place = fc
    .record({
      ghiWm2: column(-20, 2000),
      dniWm2: column(-20, 1500),
      dhiWm2: column(-20, 1500),
      cloudFraction: column(0, 1),
      airC: column(-40, 50),
      vapourPa: column(0, 4000),
      pressurePa: column(60_000, 105_000),
      linke: column(1, 9),
      gustMps: column(0, 40),
      latRad: fc.double({ min: -1.57, max: 1.57, noNaN: true }),
      lonRad: fc.double({ min: -3.14, max: 3.14, noNaN: true }),
    })
    .filter((one) => one.ghiWm2 !== undefined || (one.dniWm2 === undefined) === (one.dhiWm2 === undefined))
    .map((one): SkyPlaceInput => ({ ...one, altM: 800, ...HOURS }))
  const atMs = middles(DAY_START_MS, DAY_START_MS + 30 * HOUR_MS, 400)
  fc.assert(
    fc.property(fc.array(place, { minLength: 1, maxLength: 3 }), (places) => {
      const { sun, ...columns } = weatherAt(places, atMs)
      for (const [name, values] of Object.entries({ ...sun, ...columns }))
        expect(values.every(Number.isFinite), name).toBe(true)
      for (const name of ['ghiWm2', 'dniWm2', 'dhiWm2'] as const)
        expect(
          columns[name].every((value, i) => value >= -1e-9 && value <= 10 * columns.extraWm2[i]),
          name,
        ).toBe(true)
      expect(columns.dniWm2.every((dni, i) => dni <= columns.extraWm2[i])).toBe(true)
    }),
    { numRuns: 150, seed: 17 },
  )
})
