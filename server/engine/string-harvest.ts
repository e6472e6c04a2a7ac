import type { ArrayHarvest, PreparedArray } from './array.ts'
import { bestOfCells, exactBestOfCells, type PowerTable, powerTable } from './power-table.ts'
import { solveBest, solveBestBetween, solveHeld } from './string-point.ts'
import { isSolvable, type StringSolver, stringSolver } from './string-solver.ts'
import { loadStep } from './string-step.ts'
import { stringBest, stringBestBetweenV, stringPowerAtV } from './string.ts'
import { type StringModel, type Substring, substringsOf } from './substrings.ts'

/** An array's strings with their tables. */
export interface PreparedStrings {
  models: StringModel[]
  /** A string's cells where all are in one light, and their table; null for others. */
  plain: ({ cells: Substring; table: PowerTable } | null)[]
  /** Null where the cell is like no real one; such strings are solved exactly. */
  solvers: (StringSolver | null)[]
  /** Index of the first string that is just like this one. */
  firstAlike: number[]
}

/** Builds the tables of checked strings, one a kind of cell. */
export function prepareStrings(models: StringModel[]): PreparedStrings {
  const tables = new Map<string, PowerTable>()
  const tableOf = (string: StringModel): PowerTable => {
    const key = JSON.stringify(string.cell)
    const table = tables.get(key) ?? powerTable(string.cell)
    tables.set(key, table)
    return table
  }
  const plainOf = (string: StringModel): PreparedStrings['plain'][number] => {
    const substrings = substringsOf(string)
    const isPlain = substrings.length === 1 && substrings[0].parts.length === 1
    return isPlain ? { cells: substrings[0], table: tableOf(string) } : null
  }
  const kinds = models.map((string) => JSON.stringify({ ...string, name: '' }))
  return {
    models,
    plain: models.map(plainOf),
    solvers: models.map((string) => (isSolvable(string.cell) ? stringSolver(string) : null)),
    firstAlike: kinds.map((kind) => kinds.indexOf(kind)),
  }
}

/**
 * Fills best power and voltage of every string, step by step, from the light and warmth of the panels.
 *
 * Strings in one light from tables (within 0.04 %), others solved (within 0.003 %).
 *
 * @param harvest  effectiveWm2 and cellC are read, bestW and bestV overwritten
 * @param exact    solves every step exactly instead
 */
export function fillStrings(strings: PreparedStrings, harvest: ArrayHarvest, exact: boolean): void {
  strings.models.forEach((_, index) => fillString(strings, index, harvest, exact))
}

function fillString(strings: PreparedStrings, index: number, harvest: ArrayHarvest, exact: boolean): void {
  const out = { W: harvest.bestW[index], V: harvest.bestV[index] }
  const first = strings.firstAlike[index]
  const plain = strings.plain[index]
  const solver = strings.solvers[index]
  if (first !== index) {
    out.W.set(harvest.bestW[first])
    out.V.set(harvest.bestV[first])
  } else if (plain !== null) fillPlain(strings.models[index], plain, harvest, exact, out)
  else if (exact || solver === null) fillExactly(strings.models[index], harvest, out)
  else fillSolved(solver, harvest, out)
}

interface StepPower {
  W: Float64Array
  V: Float64Array
}

function fillPlain(
  string: StringModel,
  { cells: { panel, parts }, table }: { cells: Substring; table: PowerTable },
  harvest: ArrayHarvest,
  exact: boolean,
  out: StepPower,
): void {
  const [{ cells, lightShare }] = parts
  const scale = { cleanFraction: lightShare, cellsInSeries: cells, cells: cells * string.cellsInParallel }
  const light = { effectiveWm2: harvest.effectiveWm2[panel], cellC: harvest.cellC[panel] }
  if (exact) exactBestOfCells(string.cell, scale, light, out)
  else bestOfCells(table, scale, light, out)
}

const lightAt = (perPanel: Float64Array[], step: number): number[] => perPanel.map((steps) => steps[step])

function fillExactly(string: StringModel, harvest: ArrayHarvest, out: StepPower): void {
  for (let i = 0; i < out.W.length; i++) {
    const best = stringBest(string, lightAt(harvest.effectiveWm2, i), lightAt(harvest.cellC, i))
    out.W[i] = best.W
    out.V[i] = best.V
  }
}

function fillSolved(solver: StringSolver, { effectiveWm2, cellC }: ArrayHarvest, out: StepPower): void {
  const best = new Float64Array(3)
  for (let i = 0; i < out.W.length; i++) {
    loadStep(solver, effectiveWm2, cellC, i)
    solveBest(solver, best)
    out.W[i] = best[0]
    out.V[i] = best[1]
  }
}

/** What a string gives at a step where its tracker cannot hold it at its best point. */
export interface OffBest {
  /** Power at a voltage, 0 at and above the open-circuit voltage; within 0.003 %. [V] → [W] */
  atV(step: number, volts: number): number
  /** Voltage between two at which it gives most: a hill's top or an edge. [V] */
  bestBetweenV(step: number, lowV: number, highV: number): number
}

/** Asks for a string's power off its best point; `harvest` is not to change meanwhile. */
export function offBest(array: PreparedArray, stringIndex: number, harvest: ArrayHarvest): OffBest {
  const { effectiveWm2, cellC } = harvest
  const solver = array.strings.solvers[stringIndex]
  if (solver === null) return offBestExactly(array.strings.models[stringIndex], harvest)
  const best = new Float64Array(3)
  let bestStep = -1
  return {
    atV(step, volts) {
      if (step === bestStep && volts === best[1]) return best[0]
      loadStep(solver, effectiveWm2, cellC, step)
      return solveHeld(solver, volts)
    },
    bestBetweenV(step, lowV, highV) {
      loadStep(solver, effectiveWm2, cellC, step)
      solveBestBetween(solver, { lowV, highV }, best)
      bestStep = step
      return best[1]
    },
  }
}

const offBestExactly = (string: StringModel, { effectiveWm2, cellC }: ArrayHarvest): OffBest => ({
  atV: (step, volts) => stringPowerAtV(string, lightAt(effectiveWm2, step), lightAt(cellC, step), volts),
  bestBetweenV: (step, lowV, highV) =>
    stringBestBetweenV(string, lightAt(effectiveWm2, step), lightAt(cellC, step), { lowV, highV }),
})
