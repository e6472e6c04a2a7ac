import { z } from 'zod'
import { cellsUnderDiode } from '../engine/substrings.ts'
import { count, label, quantity } from './quantity.ts'

const place = {
  panel: label('name of the panel'),
  underDiode: count(1, 100, 'which of the bypass diodes there, from 1').default(1),
  cells: count(1, 500, 'how many cells').default(1),
}

/** Cells that do not do what their neighbours do. */
const fault = z
  .discriminatedUnion('kind', [
    z.strictObject({
      kind: z.literal('weak'),
      ...place,
      lightPct: quantity(0, 100, 'share of the panel’s light that shaded or cracked cells still use [%]'),
    }),
    z.strictObject({ kind: z.literal('shorted'), ...place }),
    z.strictObject({ kind: z.literal('open'), ...place }),
  ])
  .describe('cells that are weak (shaded, cracked), shorted (no voltage) or open (no current)')

const group = z.strictObject({
  panel: label('name of the panel'),
  inSeries: count(1, 500, 'cells in series there'),
  bypassDiodes: count(0, 100, 'bypass diodes, each over an even share of these cells; 0: none').default(1),
})

type Group = z.output<typeof group>
type Fault = z.output<typeof fault>

/** Cells in series on one tracker. */
export const string = z
  .strictObject({
    name: label('name of the string'),
    tracker: label('name of the tracker that holds it'),
    alsoTrackers: z
      .array(label('name of a tracker'))
      .max(12)
      .describe('trackers beside it that share the current evenly')
      .default([]),
    cellType: label('name of its cell type'),
    cells: z.array(group).min(1).max(12),
    inParallel: count(1, 20, 'such rows of cells in parallel').default(1),
    soilingPct: quantity(0, 90, 'light lost to dust [%]').default(0),
    bypassDropV: quantity(0, 2, 'forward drop of a bypass diode [V]').default(0.5),
    faults: z.array(fault).max(40).default([]),
  })
  .superRefine((s, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    s.cells.forEach(({ inSeries, bypassDiodes }, j) => {
      if (bypassDiodes > inSeries)
        issue(['cells', j, 'bypassDiodes'], `at most ${inSeries}, the cells there`, bypassDiodes)
    })
    s.faults.forEach((each, f) => {
      const wrong = faultProblem(each, s.cells, s.faults.slice(0, f))
      if (wrong !== null) issue(['faults', f, wrong.field], wrong.expected, each[wrong.field])
    })
    if (s.faults.length > 0 && s.inParallel > 1)
      issue(['inParallel'], '1 where the string has faults, since a fault lies in one row', s.inParallel)
  })

/** What is wrong with a fault's place, if anything: it lies under one diode of one group, beside those before it. */
function faultProblem(
  { panel, underDiode, cells }: Fault,
  groups: Group[],
  before: Fault[],
): { field: 'panel' | 'underDiode' | 'cells'; expected: string } | null {
  const there = groups.filter((each) => each.panel === panel)
  const names = [...new Set(groups.map((each) => JSON.stringify(each.panel)))].join(', ')
  if (there.length === 0) return { field: 'panel', expected: `one of this string's panels: ${names}` }
  if (there.length > 1) return { field: 'panel', expected: 'a panel that carries one group of this string' }
  const [{ inSeries, bypassDiodes }] = there
  const diodes = Math.max(1, bypassDiodes)
  if (underDiode > diodes) return { field: 'underDiode', expected: `1 to ${diodes}, the bypass diodes there` }
  const taken = before
    .filter((other) => other.panel === panel && other.underDiode === underDiode)
    .reduce((sum, other) => sum + other.cells, 0)
  const most = cellsUnderDiode(inSeries, bypassDiodes, underDiode - 1) - taken
  if (cells <= most) return null
  return { field: 'cells', expected: `at most ${most}, the cells under that diode that no other fault holds` }
}
