import { cloudTransmission } from './decompose.ts'
import { InputError } from './input-error.ts'
import { energyJm2, indexSpan, type LightSource, type LitTable, litTable } from './sky-light.ts'
import type { Light } from './sky-place.ts'
import { type Intervals, intervalsOf, type SkyColumn, type SkyPlaceInput } from './sky-table.ts'
import { type Curve, curveAlong, curveThrough, meanPreserving, plainSpans, type Span } from './time-curve.ts'

/** Highest index believed: beyond it the row and the clear sky cannot be of the same place and hour. */
const INDEX_LIMIT = 10
/** An interpolated index may rise to this or to the table's own highest, whichever is more. */
const INDEX_ROOM = 1.05
/** Twilight gives a few watts; more than this in a row without sun means a wrong clock or place. [W/m²] */
const TWILIGHT_WM2 = 15

/** A row that was not taken as it stood. */
export interface SkyNote {
  column: SkyColumn
  row: number
  what: 'index-limited' | 'beam-over-global' | 'light-while-dark'
}

type Tables = (intervals: Intervals) => LitTable

/**
 * The light of a place as factors on its clear sky.
 *
 * Each row's factor is its energy over the clear sky's energy in the same row, interpolated so that every row's
 * energy returns. Beam and diffuse where two of GHI, DNI, DHI are given, one global factor for GHI alone, Kasten–
 * Czeplak's transmission for cloud cover; irradiance goes before cloud cover.
 *
 * Where all three are given, GHI and DNI stand and the diffuse is what GHI leaves. Where the beam would be more than
 * all of GHI, GHI stands, the diffuse is DHI (none if not given) and the beam is cut to what GHI leaves.
 *
 * @param notes  receives the rows that were not taken as they stood
 * @throws InputError for DNI alone or DHI alone
 */
export function placeLight(input: SkyPlaceInput, source: LightSource, field: string, notes: SkyNote[]): Light {
  const known = new Map<Float64Array, LitTable>()
  const tables: Tables = (intervals) => {
    const table = known.get(intervals.fromMs) ?? litTable(source, intervals)
    known.set(intervals.fromMs, table)
    return table
  }
  const { ghiWm2, dniWm2, dhiWm2, cloudFraction } = input
  if (dniWm2 !== undefined || dhiWm2 !== undefined) {
    if (ghiWm2 === undefined && (dniWm2 === undefined || dhiWm2 === undefined)) {
      const alone = dniWm2 === undefined ? 'dhiWm2' : 'dniWm2'
      throw new InputError('missing', `${field}.${alone}`, 'stands alone, expected a second of ghiWm2, dniWm2, dhiWm2')
    }
    return splitLight(input, tables, field, notes)
  }
  if (ghiWm2 !== undefined) return globalLight(input, ghiWm2, tables, notes)
  return cloudFraction === undefined ? { kind: 'clear' } : cloudLight(input, cloudFraction, tables)
}

function globalLight(input: SkyPlaceInput, ghiWm2: Float64Array, tables: Tables, notes: SkyNote[]): Light {
  const table = tables(intervalsOf(input, 'ghiWm2'))
  noteLightWhileDark(table, ghiWm2, 'ghiWm2', notes)
  const spans = table.rows.flatMap((lit) =>
    believed(indexSpan(table, lit, lit.seconds * light(ghiWm2[lit.row]), table.clear.ghiWm2), 'ghiWm2', lit.row, notes),
  )
  return { kind: 'global', index: indexCurve(spans) }
}

function cloudLight(input: SkyPlaceInput, cloudFraction: Float64Array, tables: Tables): Light {
  const intervals = intervalsOf(input, 'cloudFraction')
  const table = tables(intervals)
  const spans = table.rows.flatMap((lit) => {
    const span = indexSpan(table, lit, 0, table.clear.ghiWm2)
    const through = cloudTransmission(cloudFraction[lit.row])
    return span === null || Number.isNaN(through) ? [] : [{ ...span, value: through }]
  })
  const squares = plainSpans(
    intervals.fromMs,
    intervals.toMs,
    cloudFraction.map((cloud) => cloud * cloud),
  )
  return {
    kind: 'cloud',
    transmission: meanPreserving(spans, cloudTransmission(1), 1) ?? constant(1),
    scattered: meanPreserving(squares, 0, 1) ?? constant(0),
  }
}

function splitLight(input: SkyPlaceInput, tables: Tables, field: string, notes: SkyNote[]): Light {
  const beam = indexCurve(beamSpans(input, tables, field, notes))
  const { ghiWm2, dniWm2, dhiWm2 } = input
  if (dniWm2 !== undefined) noteLightWhileDark(tables(intervalsOf(input, 'dniWm2')), dniWm2, 'dniWm2', notes)
  if (ghiWm2 === undefined) return { kind: 'split', beam, diffuse: indexCurve(dhiSpans(input, tables, notes)) }
  const table = tables(intervalsOf(input, 'ghiWm2'))
  noteLightWhileDark(table, ghiWm2, 'ghiWm2', notes)
  const index = curveAlong(beam, table.atMs, new Float64Array(table.atMs.length))
  const beamWm2 = table.beamWm2.map((clear, i) => clear * index[i])
  const sameRows = dhiWm2 !== undefined && isSameTable(input, 'ghiWm2', 'dhiWm2') ? dhiWm2 : undefined
  const spans = table.rows.flatMap((lit) => {
    const rest = lit.seconds * light(ghiWm2[lit.row]) - energyJm2(table, lit, beamWm2)
    const energy = Number.isNaN(rest) ? lit.seconds * light(sameRows?.[lit.row] ?? Number.NaN) : Math.max(rest, 0)
    return believed(indexSpan(table, lit, energy, table.clear.dhiWm2), 'ghiWm2', lit.row, notes)
  })
  return { kind: 'split', beam, diffuse: indexCurve(spans) }
}

function dhiSpans(input: SkyPlaceInput, tables: Tables, notes: SkyNote[]): Span[] {
  const table = tables(intervalsOf(input, 'dhiWm2'))
  return table.rows.flatMap((lit) => {
    const energy = lit.seconds * light(input.dhiWm2?.[lit.row] ?? Number.NaN)
    return believed(indexSpan(table, lit, energy, table.clear.dhiWm2), 'dhiWm2', lit.row, notes)
  })
}

/** Beam by DNI, cut where GHI has no room for it; by GHI less DHI where a row has no DNI. */
function beamSpans(input: SkyPlaceInput, tables: Tables, field: string, notes: SkyNote[]): Span[] {
  const { ghiWm2, dniWm2, dhiWm2 } = input
  const column = dniWm2 === undefined ? 'ghiWm2' : 'dniWm2'
  if (dniWm2 === undefined && !isSameTable(input, 'ghiWm2', 'dhiWm2'))
    throw new InputError('mismatch', `${field}.dhiWm2`, 'has other rows than ghiWm2, expected the same without dniWm2')
  const table = tables(intervalsOf(input, column))
  const valueAt = (values: Float64Array | undefined, other: SkyColumn, row: number): number =>
    values !== undefined && isSameTable(input, column, other) ? light(values[row]) : Number.NaN
  return table.rows.flatMap((lit) => {
    const ghi = valueAt(ghiWm2, 'ghiWm2', lit.row)
    const dhi = valueAt(dhiWm2, 'dhiWm2', lit.row)
    const level = Math.max(ghi - dhi, 0)
    const clearBeam = energyJm2(table, lit, table.beamWm2)
    const byDni = indexSpan(table, lit, lit.seconds * valueAt(dniWm2, 'dniWm2', lit.row), table.clear.dniWm2)
    if (byDni === null || Number.isNaN(byDni.value))
      return believed(indexSpan(table, lit, lit.seconds * level, table.beamWm2), column, lit.row, notes)
    if (!(byDni.value * clearBeam > lit.seconds * ghi)) return believed(byDni, column, lit.row, notes)
    notes.push({ column, row: lit.row, what: 'beam-over-global' })
    const room = Number.isNaN(dhi) ? ghi : level
    return believed({ ...byDni, value: (lit.seconds * room) / clearBeam }, column, lit.row, notes)
  })
}

function isSameTable(input: SkyPlaceInput, one: SkyColumn, other: SkyColumn): boolean {
  const a = intervalsOf(input, one)
  const b = intervalsOf(input, other)
  if (a === b || (a.fromMs === b.fromMs && a.toMs === b.toMs)) return true
  if (a.fromMs.length !== b.fromMs.length) return false
  return a.fromMs.every((from, row) => from === b.fromMs[row] && a.toMs[row] === b.toMs[row])
}

/** The span if it stands for a number, its index limited; dark and missing rows drop out. */
function believed(span: Span | null, column: SkyColumn, row: number, notes: SkyNote[]): Span[] {
  if (span === null || Number.isNaN(span.value)) return []
  if (span.value <= INDEX_LIMIT) return [span]
  notes.push({ column, row, what: 'index-limited' })
  return [{ ...span, value: INDEX_LIMIT }]
}

function noteLightWhileDark(table: LitTable, values: Float64Array, column: SkyColumn, notes: SkyNote[]): void {
  const lit = new Set(table.rows.map((one) => one.row))
  values.forEach((value, row) => {
    if (value > TWILIGHT_WM2 && !lit.has(row)) notes.push({ column, row, what: 'light-while-dark' })
  })
}

function indexCurve(spans: Span[]): Curve {
  const highest = spans.reduce((most, span) => Math.max(most, span.value), INDEX_ROOM)
  return meanPreserving(spans, 0, highest) ?? constant(1)
}

const constant = (value: number): Curve => curveThrough([0], [value])

/** Irradiance without a pyranometer's negative offset at night; NaN stays. */
const light = (wm2: number): number => (wm2 < 0 ? 0 : wm2)
