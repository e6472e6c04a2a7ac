import type { ArrayHarvest, PreparedArray } from './array.ts'
import { bestOfCells, exactBestOfCells, type PowerTable, powerTable } from './power-table.ts'
import { type StringModel, stringBest, stringPowerAtV } from './string.ts'

/** An array's strings with their tables. */
export interface PreparedStrings {
  models: StringModel[]
  /** Table of a string's cells; null for strings that span panels. */
  tables: (PowerTable | null)[]
  /** Index of the first string that is just like this one. */
  firstAlike: number[]
}

/** Builds the tables of checked strings, one a kind of cell. */
export function prepareStrings(models: StringModel[]): PreparedStrings {
  const tables = new Map<string, PowerTable>()
  const tableOf = (string: StringModel): PowerTable | null => {
    if (string.groups.length > 1) return null
    const key = JSON.stringify(string.cell)
    const table = tables.get(key) ?? powerTable(string.cell)
    tables.set(key, table)
    return table
  }
  const kinds = models.map((string) => JSON.stringify({ ...string, name: '' }))
  return { models, tables: models.map(tableOf), firstAlike: kinds.map((kind) => kinds.indexOf(kind)) }
}

/**
 * Fills best power and voltage of every string, step by step, from the light and warmth of the panels.
 *
 * @param harvest  effectiveWm2 and cellC are read, bestW and bestV overwritten
 * @param exact    solves every step exactly instead of reading tables
 */
export function fillStrings(strings: PreparedStrings, harvest: ArrayHarvest, exact: boolean): void {
  strings.models.forEach((_, index) => fillString(strings, index, harvest, exact))
}

function fillString(strings: PreparedStrings, index: number, harvest: ArrayHarvest, exact: boolean): void {
  const out = { W: harvest.bestW[index], V: harvest.bestV[index] }
  const first = strings.firstAlike[index]
  if (first !== index) {
    out.W.set(harvest.bestW[first])
    out.V.set(harvest.bestV[first])
    return
  }
  const string = strings.models[index]
  const table = strings.tables[index]
  if (table === null) return fillSpanningString(string, harvest, out)
  const { panel, cellsInSeries } = string.groups[0]
  const scale = {
    cleanFraction: 1 - string.soilingFraction,
    cellsInSeries,
    cells: cellsInSeries * string.cellsInParallel,
  }
  const light = { effectiveWm2: harvest.effectiveWm2[panel], cellC: harvest.cellC[panel] }
  if (exact) exactBestOfCells(string.cell, scale, light, out)
  else bestOfCells(table, scale, light, out)
}

function fillSpanningString(
  string: StringModel,
  harvest: ArrayHarvest,
  out: { W: Float64Array; V: Float64Array },
): void {
  for (let i = 0; i < out.W.length; i++) {
    const best = stringBest(string, lightAt(harvest.effectiveWm2, i), lightAt(harvest.cellC, i))
    out.W[i] = best.W
    out.V[i] = best.V
  }
}

const lightAt = (perPanel: Float64Array[], step: number): number[] => perPanel.map((steps) => steps[step])

/**
 * Power of a string at a step when its tracker holds it at a voltage off its best; exact.
 *
 * @param volts  voltage over the string, ≥ 0. [V]
 * @returns power of the string, 0 at and above its open-circuit voltage. [W]
 */
export function offBestW(
  array: PreparedArray,
  stringIndex: number,
  stepIndex: number,
  harvest: ArrayHarvest,
  volts: number,
): number {
  const string = array.strings.models[stringIndex]
  return stringPowerAtV(string, lightAt(harvest.effectiveWm2, stepIndex), lightAt(harvest.cellC, stepIndex), volts)
}
