import type { CoastRow, RowGroup } from './coast-runs.ts'
import { at, isBetweenRuns, isSameWay, meanHeadingDeg, wayNamed } from './coast-runs.ts'
import type { cellReader } from './cell-reader.ts'
import { COAST_RANGES } from './coast-table.ts'
import type { CoastNumber } from './coast-table.ts'
import type { TimeOf } from './coast-times.ts'
import type { FoundColumn } from './columns.ts'
import type { CsvRow } from './csv-cells.ts'
import type { NoticeList, ProblemList } from './file-reading.ts'

export type Columns = Map<string, FoundColumn>

interface Readers {
  timeOf: TimeOf
  readCell: ReturnType<typeof cellReader>
}

/** The rows of runs; those between runs and those without a speed are counted and left out. */
export function readRows(
  all: CsvRow[],
  byField: Columns,
  { timeOf, readCell }: Readers,
  notices: NoticeList,
): CoastRow[] {
  const parted = byField.get('run') ?? byField.get('direction')
  const rows: CoastRow[] = []
  const leftOut = { between: 0, empty: 0 }
  const cell = (row: CsvRow, field: CoastNumber): number | null => {
    const column = byField.get(field)
    return column === undefined ? null : readCell(row, column, COAST_RANGES[field])
  }
  for (const row of all) {
    if (isBetweenRuns(row, parted)) {
      leftOut.between++
      continue
    }
    const [timeS, speedKmh] = [timeOf(row), cell(row, 'speedKmh')]
    const rest = {
      gradePct: cell(row, 'gradePct'),
      headwindMps: cell(row, 'headwindMps'),
      crosswindMps: cell(row, 'crosswindMps'),
      windMps: cell(row, 'windMps'),
      windFromDeg: cell(row, 'windFromDeg'),
      headingDeg: cell(row, 'headingDeg'),
    }
    if (speedKmh === null) leftOut.empty++
    else if (timeS !== null) rows.push({ row, timeS, speedKmh, ...rest })
  }
  if (leftOut.between > 0) notices.add({ detail: `${leftOut.between} rows belong to no run; left out` })
  if (leftOut.empty > 0) notices.add({ detail: `${leftOut.empty} rows without a speed; left out` })
  return rows
}

/** What tells the run of a row: its cell under "run", else its way; rows of one run have one. */
export function runKey({ row, headingDeg }: CoastRow, last: RowGroup | undefined, byField: Columns): string {
  const [run, direction] = [byField.get('run'), byField.get('direction')]
  if (run !== undefined) return row.cells[run.index]
  if (direction !== undefined) return wayNamed(row.cells[direction.index]) ?? row.cells[direction.index]
  if (last === undefined) return 'first'
  const hasTurned = headingDeg !== null && !isSameWay(headingDeg, meanHeadingDeg(last.rows.slice(0, FIRST_ROWS)))
  if (!hasTurned) return last.label
  return last.label === 'first' ? 'second' : 'first'
}

/** Rows at the start of a run that say where it heads. */
const FIRST_ROWS = 5

const WHOLE = ['gradePct', 'headwindMps', 'crosswindMps', 'windMps', 'windFromDeg', 'headingDeg'] as const

/** Times that do not rise within a run, and columns with gaps, as problems. */
export function checkRows({ rows }: RowGroup, byField: Columns, problems: ProblemList): void {
  const time = byField.get('time')
  for (const [i, entry] of rows.entries()) {
    if (i > 0 && time !== undefined && entry.timeS <= rows[i - 1].timeS)
      problems.add(at(entry.row, time, 'expected a later time than in the row before; a column "run" parts runs'))
    for (const field of WHOLE) {
      const column = byField.get(field)
      if (column !== undefined && entry[field] === null)
        problems.add(at(entry.row, column, 'expected a value in every row of a run'))
    }
  }
}
