import type { EnergyCause } from './variant.ts'

/** A day's lines less another's: together its closing balance less that one's. */
export function energyCauses(of: EnergyCause[], less: EnergyCause[]): EnergyCause[] {
  const lines = [
    ...of,
    ...less.filter(({ id }) => !of.some((line) => line.id === id)).map((line) => ({ ...line, wh: 0 })),
  ]
  return lines.map((line) => ({ ...line, wh: line.wh - (less.find(({ id }) => id === line.id)?.wh ?? 0) }))
}
