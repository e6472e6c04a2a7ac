import { type Sky, type SkyColumn, type SkyPlaceInput, weatherAlong, type Weather } from './sky.ts'
import type { ComparedRows } from './sky-score.ts'
import { intervalsOf } from './sky-table.ts'
import { type Along, type SunPath, sunPath } from './sun.ts'

/** A sky with the tables it was made from. */
export interface SkySide {
  places: SkyPlaceInput[]
  sky: Sky
}

/** Rows are sampled at least this often. [ms] */
const SAMPLE_MS = 600_000

/** Rows of a table in which both skies were asked, at `along`; the samples of row i are first[i] to first[i + 1]. */
export interface Seen {
  fromMs: Float64Array
  toMs: Float64Array
  weightS: Float64Array
  first: Int32Array
  along: Along
  path: SunPath
  forecast: Weather
  measured: Weather
}

/**
 * The rows of a place's first column of a list that have a value and that the forecast reaches over, with both skies
 * asked in each; null where there is none.
 */
export function seenRows(
  forecast: SkySide,
  measured: Sky,
  input: SkyPlaceInput,
  columns: readonly SkyColumn[],
): Seen | null {
  const column = columns.find((name) => input[name] !== undefined)
  const reach = reachOf(forecast.places, columns)
  if (column === undefined || reach === null) return null
  const { fromMs, toMs } = intervalsOf(input, column)
  const isGiven = (row: number) => Number.isFinite(input[column]?.[row] ?? Number.NaN)
  const rows = [...fromMs.keys()].filter((i) => isGiven(i) && fromMs[i] >= reach.fromMs && toMs[i] <= reach.toMs)
  if (rows.length === 0) return null
  const kept = {
    fromMs: Float64Array.from(rows, (row) => fromMs[row]),
    toMs: Float64Array.from(rows, (row) => toMs[row]),
    weightS: Float64Array.from(rows, (row) => lengthMs(fromMs, toMs, row) / 1000),
  }
  const { along, first } = samples(kept, input)
  const path = sunPath(kept.fromMs[0], kept.toMs[rows.length - 1])
  return {
    ...kept,
    first,
    along,
    path,
    forecast: weatherAlong(forecast.sky, path, along),
    measured: weatherAlong(measured, path, along),
  }
}

function lengthMs(fromMs: Float64Array, toMs: Float64Array, row: number): number {
  if (toMs[row] > fromMs[row]) return toMs[row] - fromMs[row]
  const before = Math.max(row - 1, 0)
  const after = Math.min(row + 1, fromMs.length - 1)
  return after > before ? (fromMs[after] - fromMs[before]) / (after - before) : 1000
}

/** Over what time every place that brings one of the columns does so; null where none does. */
export function reachOf(
  places: SkyPlaceInput[],
  columns: readonly SkyColumn[],
): { fromMs: number; toMs: number } | null {
  let fromMs = Number.NEGATIVE_INFINITY
  let toMs = Number.POSITIVE_INFINITY
  for (const place of places) {
    const given = columns.filter((name) => place[name] !== undefined)
    if (given.length === 0) continue
    const ends = given.map((name) => {
      const intervals = intervalsOf(place, name)
      const values = place[name] ?? new Float64Array(0)
      const isThere = (value: number) => !Number.isNaN(value)
      return [intervals.fromMs[values.findIndex(isThere)], intervals.toMs[values.findLastIndex(isThere)]]
    })
    fromMs = Math.max(fromMs, Math.min(...ends.map(([from]) => from)))
    toMs = Math.min(toMs, Math.max(...ends.map(([, to]) => to)))
  }
  return Number.isFinite(fromMs) ? { fromMs, toMs } : null
}

/** Middles of equal parts of each row; an instant is its own. */
function samples(rows: { fromMs: Float64Array; toMs: Float64Array }, place: SkyPlaceInput) {
  const first = new Int32Array(rows.fromMs.length + 1)
  const atMs: number[] = []
  rows.fromMs.forEach((from, row) => {
    const lengthMs = rows.toMs[row] - from
    const parts = Math.max(Math.ceil(lengthMs / SAMPLE_MS), 1)
    for (let part = 0; part < parts; part++) atMs.push(from + ((part + 0.5) / parts) * lengthMs)
    first[row + 1] = atMs.length
  })
  const all = (value: number): Float64Array => new Float64Array(atMs.length).fill(value)
  const { latRad, lonRad, altM } = place
  const along: Along = {
    count: atMs.length,
    atMs: Float64Array.from(atMs),
    latRad: all(latRad),
    lonRad: all(lonRad),
    altM: all(altM),
  }
  return { along, first }
}

/** Mean of a quantity over the samples of each row. */
export function rowMeans(seen: Seen, values: Float64Array): Float64Array {
  return Float64Array.from(seen.fromMs, (_, row) => {
    let sum = 0
    for (let i = seen.first[row]; i < seen.first[row + 1]; i++) sum += values[i]
    return sum / (seen.first[row + 1] - seen.first[row])
  })
}

/** A quantity of both skies over the rows. */
export const rowsOf = (seen: Seen, pick: (weather: Weather) => Float64Array): ComparedRows => ({
  fromMs: seen.fromMs,
  toMs: seen.toMs,
  weightS: seen.weightS,
  forecast: rowMeans(seen, pick(seen.forecast)),
  measured: rowMeans(seen, pick(seen.measured)),
})
