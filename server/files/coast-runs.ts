import { shownValue } from '../documents/problem.ts'
import type { CoastRunsInput } from '../documents/coast-down.ts'
import { MOST_COAST_RUNS } from '../documents/coast-down.ts'
import { crosswindMps, headwindMps } from '../engine/wind.ts'
import type { FoundColumn } from './columns.ts'
import type { CsvRow } from './csv-cells.ts'
import { isMissing } from './csv-numbers.ts'
import type { ProblemList } from './file-reading.ts'

type RunInput = CoastRunsInput['runs'][number]
export type Way = RunInput['direction']

/** A row that was read: what is not in the file is null. */
export interface CoastRow {
  row: CsvRow
  timeS: number
  speedKmh: number
  gradePct: number | null
  headwindMps: number | null
  crosswindMps: number | null
  windMps: number | null
  windFromDeg: number | null
  headingDeg: number | null
}

/** Rows that belong together, with the label of their run. */
export interface RowGroup {
  label: string
  rows: CoastRow[]
}

const RAD = Math.PI / 180
const THERE = new Set(['there', 'out', 'outbound', 'forward', 'onward', 'go', 'a', '+', '+1'])
const BACK = new Set(['back', 'return', 'returning', 'inbound', 'reverse', 'home', 'b', '-', '-1', '\u2212', '\u22121'])

/** The way that a cell names, or null. */
export function wayNamed(cell: string): Way | null {
  const word = cell.trim().toLowerCase()
  if (THERE.has(word)) return 'there'
  return BACK.has(word) ? 'back' : null
}

/** Whether two headings lie within a quarter turn of each other. */
export const isSameWay = (aDeg: number, bDeg: number): boolean => Math.cos((aDeg - bDeg) * RAD) > 0

/** Mean heading of rows, the short way round. [°] */
export function meanHeadingDeg(rows: readonly CoastRow[]): number {
  let [east, north] = [0, 0]
  for (const { headingDeg } of rows) {
    east += Math.sin((headingDeg ?? 0) * RAD)
    north += Math.cos((headingDeg ?? 0) * RAD)
  }
  return Math.atan2(east, north) / RAD
}

/** What tells the way of each run. */
export interface Ways {
  direction?: FoundColumn
  heading?: FoundColumn
}

/**
 * The way of every run: by its column, which must not change within a run; by the heading, the first run's being
 * there; or in turn. Problems name the row.
 */
export function waysOf(groups: readonly RowGroup[], ways: Ways, problems: ProblemList): Way[] {
  const { direction, heading } = ways
  if (direction !== undefined) return groups.map(({ rows }) => wayByWord(rows, direction, problems))
  if (heading === undefined) return groups.map((_, i) => (i % 2 === 0 ? 'there' : 'back'))
  const first = meanHeadingDeg(groups[0].rows)
  return groups.map(({ rows }) => {
    const mean = meanHeadingDeg(rows)
    const astray = rows.find(({ headingDeg }) => !isSameWay(headingDeg ?? mean, mean))
    if (astray !== undefined)
      problems.add(
        at(astray.row, heading, 'expected one heading in a run; it turns here: part the runs with a column "run"'),
      )
    const across = Math.abs(Math.cos((mean - first) * RAD)) < Math.SQRT1_2
    if (across)
      problems.add(
        at(
          rows[0].row,
          heading,
          `expected about ${turned(first)}° or ${turned(first + 180)}°, along the road of the first run`,
        ),
      )
    return isSameWay(mean, first) ? 'there' : 'back'
  })
}

const turned = (deg: number): string => (((deg % 360) + 360) % 360).toFixed(0)

function wayByWord(rows: readonly CoastRow[], column: FoundColumn, problems: ProblemList): Way {
  const first = wayNamed(rows[0].row.cells[column.index])
  for (const { row } of rows) {
    const way = wayNamed(row.cells[column.index])
    if (way === null) problems.add(at(row, column, 'expected "there" or "back"'))
    else if (first !== null && way !== first)
      problems.add(at(row, column, `expected "${first}" as in the rows of this run before`))
  }
  return first ?? 'there'
}

/** A problem with the cell of a row. */
export const at = (row: CsvRow, column: FoundColumn, detail: string) => ({
  field: column.header,
  value: shownValue(row.cells[column.index]),
  detail,
  line: row.line,
  column: row.columns[column.index],
})

/**
 * Rows parted into runs: by the label where there is a column of runs, else wherever the way changes.
 *
 * @param keyOf  what tells a row's run from the next, for example its cell under "run"
 */
export function grouped(
  rows: readonly CoastRow[],
  keyOf: (row: CoastRow, last: RowGroup | undefined) => string,
): RowGroup[] {
  const groups: RowGroup[] = []
  for (const row of rows) {
    const last = groups.at(-1)
    const label = keyOf(row, last)
    if (last?.label === label) last.rows.push(row)
    else groups.push({ label, rows: [row] })
  }
  return groups
}

/** Runs that come twice, and runs too many, as problems. */
export function checkGroups(groups: readonly RowGroup[], column: FoundColumn | undefined, problems: ProblemList): void {
  if (groups.length > MOST_COAST_RUNS) {
    const { row } = groups[MOST_COAST_RUNS].rows[0]
    problems.add({
      field: 'run',
      value: `${groups.length} runs`,
      detail: `expected at most ${MOST_COAST_RUNS} runs; part them with a column "run"`,
      line: row.line,
      column: 1,
    })
  }
  if (column === undefined) return
  const seen = new Set<string>()
  for (const { label, rows } of groups) {
    if (seen.has(label)) problems.add(at(rows[0].row, column, 'expected a run in one piece; other runs stand between'))
    seen.add(label)
  }
}

/** A group as a run of the document, its wind turned to headwind and crosswind. */
export function runOf({ rows }: RowGroup, name: string, direction: Way): RunInput {
  const column = (value: (row: CoastRow) => number | null): number[] | undefined => {
    const values = rows.flatMap((row) => value(row) ?? [])
    return values.length === rows.length ? values : undefined
  }
  const turnedWind = (turn: typeof headwindMps) => (row: CoastRow) => {
    const { windMps, windFromDeg, headingDeg } = row
    return windMps === null ? null : turn(windMps, (windFromDeg ?? 0) * RAD, (headingDeg ?? 0) * RAD)
  }
  const head = column((row) => row.headwindMps)
  const gradePct = column((row) => row.gradePct)
  const headwind = head ?? column(turnedWind(headwindMps))
  const crosswind =
    column((row) => row.crosswindMps) ?? (head === undefined ? column(turnedWind(crosswindMps)) : undefined)
  return {
    name,
    direction,
    timeS: rows.map(({ timeS }) => timeS),
    speedKmh: rows.map(({ speedKmh }) => speedKmh),
    ...(gradePct && { gradePct }),
    ...(headwind && { headwindMps: headwind }),
    ...(crosswind && { crosswindMps: crosswind }),
  }
}

/** Whether a row stands between runs: its run, or where there is none its way, is left empty. */
export const isBetweenRuns = (row: CsvRow, column: FoundColumn | undefined): boolean =>
  column !== undefined && isMissing(row.cells[column.index])
