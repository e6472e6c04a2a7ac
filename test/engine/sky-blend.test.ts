import { describe, expect, it } from 'vitest'
import { prepareSky, type SkyPlaceInput, type Weather, weatherAlong } from '../../server/engine/sky.ts'
import { sunPath } from '../../server/engine/sun.ts'
import { DAY_START_MS, HOUR_MS, mean, middles, rowsOf, SALTPAN, standing } from './sky-scenes.ts'

const RAD = Math.PI / 180
const ROWS = rowsOf(24, HOUR_MS)
const NOON = middles(DAY_START_MS + 7 * HOUR_MS, DAY_START_MS + 15 * HOUR_MS, 48)
const NORTH = { ...SALTPAN, latRad: SALTPAN.latRad + 0.25 * RAD }
const SOUTH = { ...SALTPAN, latRad: SALTPAN.latRad - 0.25 * RAD }

/** Weather of a sky at a place over the middle of the day. */
function seen(places: SkyPlaceInput[], at: typeof SALTPAN, atMs = NOON): Weather {
  const sky = prepareSky({ places, linkeDefault: 3 })
  return weatherAlong(sky, sunPath(DAY_START_MS, DAY_START_MS + 24 * HOUR_MS), standing(at, atMs))
}

const clearAt = (place: typeof SALTPAN, atMs = NOON) => seen([{ ...place, ...ROWS }], place, atMs)

/** Hours of a place whose light is so much of its clear sky's. */
function hours(place: typeof SALTPAN, columns: (clear: Weather[]) => Partial<SkyPlaceInput>): SkyPlaceInput {
  const clear = [...ROWS.fromMs].map((from, row) => clearAt(place, middles(from, ROWS.toMs[row], 60)))
  return { ...place, ...ROWS, ...columns(clear) }
}
const global = (place: typeof SALTPAN, index: number) =>
  hours(place, (clear) => ({ ghiWm2: Float64Array.from(clear, ({ ghiWm2 }) => index * mean(ghiWm2)) }))
const split = (place: typeof SALTPAN, beam: number, diffuse: number) =>
  hours(place, (clear) => ({
    dniWm2: Float64Array.from(clear, ({ dniWm2 }) => beam * mean(dniWm2)),
    dhiWm2: Float64Array.from(clear, ({ dhiWm2 }) => diffuse * mean(dhiWm2)),
  }))

/** Both light and the clear sky's own are far from zero, so the ratio is by 48 honest numbers. */
const indices = (values: Float64Array, clear: Float64Array): number[] => [...values].map((value, i) => value / clear[i])
const expectAll = (values: number[], expected: number, digits: number) => {
  expect(values).toHaveLength(48)
  for (const value of values) expect(value).toBeCloseTo(expected, digits)
}

describe('a sky of two places', () => {
  it('has each place’s own light at the place', () => {
    const places = [global(NORTH, 0.4), global(SOUTH, 0.9)]
    expectAll(indices(seen(places, NORTH).ghiWm2, clearAt(NORTH).ghiWm2), 0.4, 4)
    expectAll(indices(seen(places, SOUTH).ghiWm2, clearAt(SOUTH).ghiWm2), 0.9, 4)
  })
  it('has the mean of the two indices halfway between them', () => {
    const places = [global(NORTH, 0.4), global(SOUTH, 0.9)]
    expectAll(indices(seen(places, SALTPAN).ghiWm2, clearAt(SALTPAN).ghiWm2), 0.65, 4)
  })
  it('blends beam and diffuse each by its own factor', () => {
    const between = seen([split(NORTH, 0.2, 1.4), split(SOUTH, 0.8, 1)], SALTPAN)
    expectAll(indices(between.dniWm2, clearAt(SALTPAN).dniWm2), 0.5, 4)
    expectAll(indices(between.dhiWm2, clearAt(SALTPAN).dhiWm2), 1.2, 4)
  })
  it('weighs by inverse distance squared', () => {
    // A quarter of the way: distances 1 and 3, weights 9/10 and 1/10.
    const quarter = { ...SALTPAN, latRad: NORTH.latRad - 0.125 * RAD }
    const index = indices(seen([global(NORTH, 0.4), global(SOUTH, 0.9)], quarter).ghiWm2, clearAt(quarter).ghiWm2)
    expectAll(index, 0.9 * 0.4 + 0.1 * 0.9, 4)
  })
  it('blends a place that tells of cloud with one that tells of light', () => {
    // Kasten-Czeplak: 4 of 8 let 1 - 0.75·0.5^3.4 = 0.92896 of the clear sky through.
    const cloudy = { ...NORTH, ...ROWS, cloudFraction: new Float64Array(24).fill(0.5) }
    const between = seen([cloudy, global(SOUTH, 0.5)], SALTPAN)
    expectAll(indices(between.ghiWm2, clearAt(SALTPAN).ghiWm2), (0.92896 + 0.5) / 2, 3)
  })
  it('has the place’s own air and wind there, and the short way round between', () => {
    const air = (place: typeof SALTPAN, airC: number, fromDeg: number): SkyPlaceInput => ({
      ...place,
      ...ROWS,
      airC: new Float64Array(24).fill(airC),
      windMps: new Float64Array(24).fill(4),
      windFromRad: new Float64Array(24).fill(fromDeg * RAD),
    })
    const places = [air(NORTH, 30, 350), air(SOUTH, 20, 10)]
    expect(seen(places, NORTH).airC[0]).toBeCloseTo(30, 6)
    expect(seen(places, SALTPAN).airC[0]).toBeCloseTo(25, 6)
    expect(Math.cos(seen(places, SALTPAN).windFromRad[0])).toBeCloseTo(1, 6)
    expect(Math.cos(seen(places, SOUTH).windFromRad[0] - 10 * RAD)).toBeCloseTo(1, 6)
  })
})
