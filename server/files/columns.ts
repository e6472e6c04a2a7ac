import { shownValue } from '../documents/problem.ts'
import type { CsvRow } from './csv-cells.ts'
import type { ProblemList } from './file-reading.ts'
import { headerParts, matchHeader, readMapped } from './header.ts'
import type { FieldSpec, HeaderMatch } from './header.ts'
import { UNITS, inWords, unitNamed, unitsOf } from './units.ts'

/** A column of the table that was recognised, with the unit its numbers have. */
export interface FoundColumn extends HeaderMatch {
  field: string
  index: number
  header: string
  /** No unit was stated and the document's own was taken. */
  isUnitAssumed: boolean
  line: number
  column: number
}

export interface ColumnWishes {
  /** Header by field, where the person says which column is which. */
  columns?: Record<string, string>
  /** Unit by field, where the header does not say or says wrongly. */
  units?: Record<string, string>
}

export interface FoundColumns {
  byField: Map<string, FoundColumn>
  ignored: string[]
}

/** Which column is which: as the person says, else by the header; what is doubtful goes to the problems. */
export function findColumns(
  header: CsvRow,
  specs: FieldSpec[],
  wishes: ColumnWishes,
  problems: ProblemList,
): FoundColumns {
  const byField = new Map<string, FoundColumn>()
  const taken = new Set<number>()
  for (const [field, wanted] of Object.entries(wishes.columns ?? {})) {
    const spec = specs.find((candidate) => candidate.field === field)
    const index = mappedIndex(header, `columns.${field}`, wanted, problems)
    if (spec === undefined || index < 0) continue
    taken.add(index)
    byField.set(field, foundColumn(header, index, readMapped(header.cells[index], spec)))
  }
  const mapped = new Set(byField.keys())
  const ignored: string[] = []
  header.cells.forEach((text, index) => {
    if (taken.has(index)) return
    const match = firstMatch(text, specs)
    if (match === null || mapped.has(match.spec.field)) {
      if (text !== '') ignored.push(text)
      return
    }
    const column = foundColumn(header, index, match)
    const twin = byField.get(column.field)
    if (twin === undefined) byField.set(column.field, column)
    else problems.add(twinProblem(column, twin))
  })
  for (const column of byField.values()) settleUnit(column, wishes.units?.[column.field], problems)
  return { byField, ignored }
}

function firstMatch(text: string, specs: FieldSpec[]): HeaderMatch | null {
  const header = headerParts(text)
  for (const spec of specs) {
    const match = matchHeader(header, spec)
    if (match !== null) return match
  }
  return null
}

function mappedIndex(header: CsvRow, field: string, wanted: string, problems: ProblemList): number {
  const same = (text: string) => text.trim().toLowerCase() === wanted.trim().toLowerCase()
  const index = header.cells.findIndex(same)
  const value = shownValue(wanted)
  if (index < 0) {
    const detail = `expected one of the headers ${shownHeaders(header)}`
    problems.add({ field, value, detail, line: header.line, column: 1 })
  }
  const again = header.cells.findIndex((text, i) => i > index && same(text))
  if (index >= 0 && again >= 0)
    problems.add({ field, value, detail: 'expected one column of this name, found two', ...at(header, again) })
  return index
}

export const shownHeaders = (header: CsvRow): string => {
  const shown = header.cells.slice(0, 20).map((text) => shownValue(text) ?? '')
  return inWords(header.cells.length > 20 ? [...shown, '…'] : shown)
}

const at = (header: CsvRow, index: number) => ({ line: header.line, column: header.columns[index] })

const foundColumn = (header: CsvRow, index: number, match: HeaderMatch): FoundColumn => ({
  ...match,
  field: match.spec.field,
  index,
  header: header.cells[index],
  isUnitAssumed: false,
  ...at(header, index),
})

const twinProblem = (column: FoundColumn, twin: FoundColumn) => ({
  field: column.field,
  value: shownValue(column.header),
  detail: `expected one column, but ${shownValue(twin.header)} means the same; say which with columns: { ${column.field}: "…" }`,
  line: column.line,
  column: column.column,
})

/** Words in brackets that are no unit are one, for a column that needs one: a wrong guess would go unseen. */
function settleUnit(column: FoundColumn, wished: string | undefined, problems: ProblemList): void {
  const { spec, field, header, line } = column
  if (UNITS[spec.kind].length === 0) return
  const say = (detail: string, value: string) =>
    problems.add({ field, value: shownValue(value), detail, line, column: column.column })
  const how = `say it in the header or with units: { ${field}: "${UNITS[spec.kind][0]?.name}" }`
  if (wished !== undefined) {
    column.unit = unitNamed(spec.kind, wished)
    if (column.unit === undefined) say(`expected as its unit ${unitsOf(spec.kind)}`, wished)
    return
  }
  const strange = column.notes.find((note) => !KNOWN_NOTES.test(note))
  if (column.unit === undefined && strange !== undefined)
    return say(`unit "${shortened(strange)}" unknown: expected ${unitsOf(spec.kind)}; ${how}`, header)
  if (column.unit !== undefined) return
  if (spec.bare === 'refuse') return say(`no unit stated: expected ${unitsOf(spec.kind)}; ${how}`, header)
  column.unit = UNITS[spec.kind][0]
  column.isUnitAssumed = spec.bare === 'say'
}

const KNOWN_NOTES = /^(?:from|mean|average|avg|hourly|station|sea[ -]level|msl|qfe|total|horizontal)$/i
const shortened = (text: string) => (text.length > 30 ? `${text.slice(0, 30)}…` : text)
