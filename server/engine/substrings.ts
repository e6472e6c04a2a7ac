import type { CellReference } from './cell.ts'

/** Cells of a string that share one panel, and so one light and one temperature. */
export interface CellGroup {
  /** Index of the panel that carries them. */
  panel: number
  cellsInSeries: number
  /** Diodes that let current past them, each over an even share of the cells; 1 where left out, 0 for none. */
  bypassDiodes?: number
}

/** Cells that do not do what the others of their group do. */
export interface CellFault {
  /** Index of the group. */
  group: number
  /** Under which of the group's bypass diodes, from 0; 0 where it has none. */
  diode: number
  cells: number
  /** Weak cells get a share of the light, shorted ones carry current without voltage, open ones carry none. */
  kind: 'weak' | 'shorted' | 'open'
  /** Share of the panel's light that weak cells get, 0..1. */
  lightShare: number
}

/** Cells in series that feed one tracker; they may span panels. */
export interface StringModel {
  name: string
  /** One cell at 1000 W/m², 25 °C. */
  cell: CellReference
  groups: CellGroup[]
  faults?: CellFault[]
  cellsInParallel: number
  /** Share of the light that dust takes, 0..1. */
  soilingFraction: number
  /** Voltage lost over one bypass diode that carries the string's current. [V] */
  bypassV: number
}

/** Equal cells in series in one light. */
export interface EqualCells {
  cells: number
  /** Share of the panel's light that they get: dust and fault together. */
  lightShare: number
}

/** Cells that share what lets current past them: together at their own voltage or, where that is lower, at −dropV. */
export interface Substring {
  panel: number
  /** Never empty. */
  parts: EqualCells[]
  /** Infinity where no diode lets current past. [V] */
  dropV: number
}

/** Cells under one of a group's bypass diodes: as even as whole cells allow, the first diodes hold one more. */
export function cellsUnderDiode(cells: number, diodes: number, diode: number): number {
  if (diodes === 0) return cells
  return Math.floor(cells / diodes) + (diode < cells % diodes ? 1 : 0)
}

/**
 * A string as what gives way together: per group its sound substrings taken as one, and each that holds a fault.
 *
 * Sound substrings of a group are alike and give way together. Cells that are shorted are gone; a substring of nothing
 * else carries any current at no voltage.
 */
export function substringsOf(string: StringModel): Substring[] {
  return string.groups.flatMap((group, g) => {
    const faults = (string.faults ?? []).filter((fault) => fault.group === g)
    const hit = [...new Set(faults.map((fault) => fault.diode))]
    const diodes = group.bypassDiodes ?? 1
    const sizes = hit.map((diode) => cellsUnderDiode(group.cellsInSeries, diodes, diode))
    const soundCells = group.cellsInSeries - sizes.reduce((sum, cells) => sum + cells, 0)
    const clean = 1 - string.soilingFraction
    const over = (count: number): number => (diodes === 0 ? Infinity : string.bypassV * count)
    const hurt = hit.map((diode, h) => ({
      panel: group.panel,
      parts: partsUnder(
        faults.filter((fault) => fault.diode === diode),
        sizes[h],
        clean,
      ),
      dropV: over(1),
    }))
    const sound = {
      panel: group.panel,
      parts: soundCells > 0 ? [{ cells: soundCells, lightShare: clean }] : [],
      dropV: over(diodes - hit.length),
    }
    return [sound, ...hurt].filter(({ parts }) => parts.length > 0)
  })
}

/** Kinds of cells under one diode: the sound ones, then those of each fault that still count. */
function partsUnder(faults: CellFault[], size: number, clean: number): EqualCells[] {
  const sound = size - faults.reduce((sum, { cells }) => sum + cells, 0)
  const weak = faults
    .filter(({ kind }) => kind !== 'shorted')
    .map(({ cells, kind, lightShare }) => ({ cells, lightShare: kind === 'open' ? 0 : lightShare * clean }))
  return sound > 0 ? [{ cells: sound, lightShare: clean }, ...weak] : weak
}
