import { weatherFile } from '../server/files/weather-kind.ts'

/** Content type to send a file under, by the end of its name. */
export function fileType(name: string): string {
  if (/\.gpx$/i.test(name)) return 'application/gpx+xml'
  if (/\.json$/i.test(name)) return 'application/json'
  return 'text/csv'
}

/** Whether a file is a typical year as EPW or TMY3, by its first two lines. */
export async function yearKindOf(file: Blob): Promise<'epw' | 'tmy3' | 'other'> {
  const kind = weatherFile(await file.slice(0, MOST_HEADER_BYTES).text())
  return kind === 'epw' || kind === 'tmy3' ? kind : 'other'
}

const MOST_HEADER_BYTES = 20_000

/** Column names of a table’s first line that is not a comment, parted by what parts it into most cells. */
export async function headerOf(file: Blob): Promise<string[]> {
  const text = (await file.slice(0, MOST_HEADER_BYTES).text()).replace(/^\ufeff/, '')
  const line = text.split(/\r?\n/).find((candidate) => candidate.trim() !== '' && !candidate.startsWith('#')) ?? ''
  const parts = [',', ';', '\t'].map((delimiter) => cellsOf(line, delimiter))
  return parts.reduce((a, b) => (b.length > a.length ? b : a)).filter((name) => name !== '')
}

/** Cells of one line; a delimiter inside quotes parts nothing. */
function cellsOf(line: string, delimiter: string): string[] {
  const cells = ['']
  let isQuoted = false
  for (const sign of line) {
    if (sign === '"') isQuoted = !isQuoted
    else if (sign === delimiter && !isQuoted) cells.push('')
    else cells[cells.length - 1] += sign
  }
  return cells.map((cell) => cell.trim())
}
