import { InputError } from './input-error.ts'

/** A factor on the cells' resistance by their charge and temperature. */
export interface FactorTable {
  /** Ascending, 0..1. */
  charge: Float64Array
  /** Ascending. [C] */
  tempC: Float64Array
  /** `factor[i * tempC.length + j]` at charge i and temperature j; above 0. */
  factor: Float64Array
}

/** @throws InputError naming the part of the table that is wrong */
export function checkFactors(name: string, table: FactorTable): void {
  const fail = (part: string, detail: string): never => {
    throw new InputError('bad-table', `${name}.${part}`, detail)
  }
  const { charge, tempC, factor } = table
  for (const [part, axis] of [
    ['charge', charge],
    ['tempC', tempC],
  ] as const)
    if (axis.length === 0 || !axis.every((v, i) => Number.isFinite(v) && (i === 0 || v > axis[i - 1])))
      fail(part, 'not ascending, ascending numbers expected')
  const wanted = charge.length * tempC.length
  if (factor.length !== wanted) fail('factor', `${factor.length} values given, ${wanted} expected`)
  const wrong = factor.findIndex((f) => !(f > 0 && Number.isFinite(f)))
  if (wrong >= 0) fail(`factor[${wrong}]`, `${factor[wrong]} given, a number above 0 expected`)
}

/**
 * The factor between the points of its table, bilinear; beyond its edges that of the edge.
 *
 * @param charge charge of the cell, 0..1
 * @param tempC  its temperature. [C]
 */
export function ohmFactor({ charge: x, tempC: t, factor }: FactorTable, charge: number, tempC: number): number {
  const m = t.length
  const i = stretch(x, charge)
  const j = stretch(t, tempC)
  const iNext = Math.min(i + 1, x.length - 1)
  const jNext = Math.min(j + 1, m - 1)
  const u = share(x[i], x[iNext], charge)
  const w = share(t[j], t[jNext], tempC)
  const low = factor[i * m + j] + u * (factor[iNext * m + j] - factor[i * m + j])
  const high = factor[i * m + jNext] + u * (factor[iNext * m + jNext] - factor[i * m + jNext])
  return low + w * (high - low)
}

function stretch(axis: Float64Array, value: number): number {
  let i = 0
  while (i < axis.length - 2 && axis[i + 1] < value) i++
  return i
}

const share = (from: number, to: number, value: number): number =>
  to > from ? Math.min(Math.max((value - from) / (to - from), 0), 1) : 0
