import type { CellReference } from './cell.ts'
import { InputError } from './input-error.ts'
import { positive, wholeFrom, within } from './number-check.ts'
import { type CellFault, type CellGroup, cellsUnderDiode, type StringModel } from './substrings.ts'

/** @throws InputError that names the string's first wrong field, its value and what was expected */
export function checkString(field: string, string: StringModel, panels: number): void {
  checkCell(`${field}.cell`, string.cell)
  wholeFrom(`${field}.cellsInParallel`, string.cellsInParallel, 1)
  within(`${field}.soilingFraction`, string.soilingFraction, 0, 1, '')
  within(`${field}.bypassV`, string.bypassV, 0, 1000, ' V')
  if (string.groups.length === 0)
    throw new InputError('empty', `${field}.groups`, 'is empty, expected one group or more')
  string.groups.forEach((group, g) => checkGroup(`${field}.groups[${g}]`, group, panels))
  const faults = string.faults ?? []
  faults.forEach((fault, f) => checkFault(`${field}.faults[${f}]`, fault, string, faults.slice(0, f)))
  const rows = string.cellsInParallel
  if (faults.length > 0 && rows > 1)
    throw new InputError(
      'out-of-range',
      `${field}.cellsInParallel`,
      `is ${rows}, expected 1 where the string has faults`,
    )
}

function checkCell(field: string, cell: CellReference): void {
  positive(`${field}.lightA`, cell.lightA, ' A')
  positive(`${field}.saturationA`, cell.saturationA, ' A')
  within(`${field}.seriesOhm`, cell.seriesOhm, 0, 1000, ' Ω')
  positive(`${field}.shuntOhm`, cell.shuntOhm, ' Ω')
  positive(`${field}.modifiedIdealityV`, cell.modifiedIdealityV, ' V')
  within(`${field}.currentCoefficientAPerC`, cell.currentCoefficientAPerC, -1, 1, ' A/K')
  within(`${field}.bandGapEv`, cell.bandGapEv, 0.1, 5, ' eV')
  within(`${field}.bandGapPerC`, cell.bandGapPerC, -0.01, 0.01, ' 1/K')
}

function checkGroup(field: string, group: CellGroup, panels: number): void {
  wholeFrom(`${field}.panel`, group.panel, 0)
  if (group.panel >= panels)
    throw new InputError(
      'unknown-panel',
      `${field}.panel`,
      `is ${group.panel}, expected one of ${panels} panels from 0`,
    )
  wholeFrom(`${field}.cellsInSeries`, group.cellsInSeries, 1)
  if (group.bypassDiodes === undefined) return
  wholeFrom(`${field}.bypassDiodes`, group.bypassDiodes, 0)
  within(`${field}.bypassDiodes`, group.bypassDiodes, 0, group.cellsInSeries, '')
}

/** A fault lies under one diode of one group, beside those before it. */
function checkFault(field: string, fault: CellFault, string: StringModel, before: CellFault[]): void {
  wholeFrom(`${field}.group`, fault.group, 0)
  within(`${field}.group`, fault.group, 0, string.groups.length - 1, '')
  const { cellsInSeries, bypassDiodes = 1 } = string.groups[fault.group]
  wholeFrom(`${field}.diode`, fault.diode, 0)
  within(`${field}.diode`, fault.diode, 0, Math.max(0, bypassDiodes - 1), '')
  const taken = before
    .filter(({ group, diode }) => group === fault.group && diode === fault.diode)
    .reduce((sum, { cells }) => sum + cells, 0)
  wholeFrom(`${field}.cells`, fault.cells, 1)
  within(`${field}.cells`, fault.cells, 1, cellsUnderDiode(cellsInSeries, bypassDiodes, fault.diode) - taken, '')
  within(`${field}.lightShare`, fault.lightShare, 0, 1, '')
}
