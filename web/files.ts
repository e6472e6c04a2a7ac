/** Content type to send a file under, by the end of its name. */
export function fileType(name: string): string {
  if (/\.gpx$/i.test(name)) return 'application/gpx+xml'
  if (/\.json$/i.test(name)) return 'application/json'
  return 'text/csv'
}

const MOST_HEADER_BYTES = 20_000

/** Column names of a table’s first line that is not a comment, with the delimiter that splits it best. */
export async function headerOf(file: Blob): Promise<string[]> {
  const text = (await file.slice(0, MOST_HEADER_BYTES).text()).replace(/^\ufeff/, '')
  const line = text.split(/\r?\n/).find((candidate) => candidate.trim() !== '' && !candidate.startsWith('#')) ?? ''
  const parts = [',', ';', '\t'].map((delimiter) => line.split(delimiter))
  const best = parts.reduce((a, b) => (b.length > a.length ? b : a))
  return best.map((name) => name.trim().replace(/^"|"$/g, '')).filter((name) => name !== '')
}
