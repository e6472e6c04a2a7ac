import { readFileSync } from 'node:fs'

/** Text of a file in test/reference. */
export const referenceText = (name: string): string =>
  readFileSync(new URL(`../reference/${name}`, import.meta.url), 'utf8')

/** Rows of a reference CSV whose comment lines start with '#': one object of strings per row. */
export function referenceRows(name: string): Record<string, string>[] {
  const lines = referenceText(name)
    .split(/\r?\n/)
    .filter((line) => line !== '' && !line.startsWith('#'))
  const columns = lines[0].split(',')
  return lines.slice(1).map((line) => {
    const cells = line.split(',')
    return Object.fromEntries(columns.map((column, i) => [column, cells[i]]))
  })
}
