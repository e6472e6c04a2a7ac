import { InputError } from './input-error.ts'

/** Open-circuit voltage over the state of charge, straight lines between points. */
export interface OcvTable {
  /** State of charge by charge, ascending from 0 to 1. */
  charge: Float64Array
  V: Float64Array
}

/** @throws InputError naming the part of the table that is wrong */
export function checkOcv({ charge, V }: OcvTable): void {
  const n = charge.length
  const fail = (part: string, detail: string): never => {
    throw new InputError('bad-table', `pack.ocv${part}`, detail)
  }
  if (n < 2 || V.length !== n) fail('', `${n} charges and ${V.length} voltages given, as many of each expected`)
  if (charge[0] !== 0 || charge[n - 1] !== 1) fail('.charge', `${charge[0]} to ${charge[n - 1]} given, 0 to 1 expected`)
  for (let i = 0; i < n; i++) {
    if (!(V[i] > 0 && Number.isFinite(V[i]))) fail(`.V[${i}]`, `${V[i]} given, a voltage above 0 expected`)
    if (i === 0) continue
    if (!(charge[i] > charge[i - 1])) fail(`.charge[${i}]`, `${charge[i]} given, more than ${charge[i - 1]} expected`)
    if (V[i] < V[i - 1]) fail(`.V[${i}]`, `${V[i]} given, at least ${V[i - 1]} expected, as voltage rises with charge`)
  }
}

/** Index of the stretch of an ascending axis that holds a value. */
export function stretchIn(axis: Float64Array, value: number): number {
  let low = 0
  let high = axis.length - 2
  while (low < high) {
    const middle = (low + high) >> 1
    if (axis[middle + 1] < value) low = middle + 1
    else high = middle
  }
  return low
}

/** Rested voltage at a charge within 0 and 1. [V] */
export function voltsAt({ charge: x, V }: OcvTable, charge: number): number {
  const i = stretchIn(x, charge)
  return V[i] + ((charge - x[i]) * (V[i + 1] - V[i])) / (x[i + 1] - x[i])
}

/** Lowest charge at which a table holds a voltage; its start below the table, its end above. */
export function chargeAtV({ charge, V }: OcvTable, volts: number): number {
  if (!(volts > V[0])) return 0
  if (volts > V[V.length - 1]) return charge[charge.length - 1]
  const i = stretchIn(V, volts)
  return charge[i] + ((volts - V[i]) * (charge[i + 1] - charge[i])) / (V[i + 1] - V[i])
}

/**
 * Current at which OCV after the step and the drop over `ohm` meet `targetV`: V(x) + ohm·I = targetV.
 * Walks the table away from `charge`, `perA` of charge for each ampere; positive charges.
 */
export function currentAtVoltage(
  { charge: x, V }: OcvTable,
  charge: number,
  perA: number,
  ohm: number,
  targetV: number,
): number {
  let i = stretchIn(x, charge)
  const startV = V[i] + ((charge - x[i]) * (V[i + 1] - V[i])) / (x[i + 1] - x[i])
  const up = targetV > startV
  if (perA === 0) return ohm > 0 ? (targetV - startV) / ohm : up ? Infinity : -Infinity
  for (;;) {
    const slope = (V[i + 1] - V[i]) / (x[i + 1] - x[i])
    const currentA = (targetV - V[i] - slope * (charge - x[i])) / (slope * perA + ohm)
    const end = charge + currentA * perA
    const next = up ? i + 1 : i - 1
    if ((up ? end <= x[i + 1] : end >= x[i]) || next < 0 || next > x.length - 2) return currentA
    i = next
  }
}
