import { InputError } from './input-error.ts'

/** Open-circuit voltage of the whole pack over its state of charge, straight lines between points. */
export interface OcvTable {
  /** State of charge by charge, ascending from 0 to 1. */
  charge: Float64Array
  V: Float64Array
}

/** The pack as its terminals show it; one cell's numbers times cells in series and parallel. */
export interface PackInput {
  /** Charge between empty and full, coulombs (ampere-hours x 3600). */
  capacityC: number
  ocv: OcvTable
  resistanceOhm: number
  chargeMaxV: number
  dischargeMinV: number
  chargeMaxA: number
  dischargeMaxA: number
  /** Share of the charging current that stays as charge, above 0 up to 1. */
  coulombicEfficiency: number
}

/** A checked pack; `belowJ` is the energy stored below each point of the OCV table. */
export interface Pack extends PackInput {
  belowJ: Float64Array
}

/**
 * A pack that the step functions can rely on.
 *
 * @throws InputError naming the field when a number is missing or out of range
 */
export function preparePack(pack: PackInput): Pack {
  for (const name of ['capacityC', 'resistanceOhm', 'chargeMaxV', 'chargeMaxA', 'dischargeMaxA'] as const) {
    requireRange(name, pack[name], (value) => value > 0, 'a number above 0')
  }
  const isShare = (value: number): boolean => value > 0 && value <= 1
  requireRange('coulombicEfficiency', pack.coulombicEfficiency, isShare, 'above 0 up to 1')
  requireRange(
    'dischargeMinV',
    pack.dischargeMinV,
    (value) => value >= 0 && value < pack.chargeMaxV,
    'at least 0 and below chargeMaxV',
  )
  checkOcv(pack.ocv)
  return { ...pack, belowJ: energyBelow(pack.ocv, pack.capacityC) }
}

function requireRange(name: string, value: number, isGood: (value: number) => boolean, wanted: string): void {
  if (!Number.isFinite(value) || !isGood(value)) {
    throw new InputError('out-of-range', `pack.${name}`, `${value} given, ${wanted} expected`)
  }
}

function checkOcv({ charge, V }: OcvTable): void {
  const n = charge.length
  if (n < 2 || V.length !== n) {
    throw new InputError(
      'bad-table',
      'pack.ocv',
      `${n} charges and ${V.length} voltages given, as many of each expected`,
    )
  }
  if (charge[0] !== 0 || charge[n - 1] !== 1) {
    throw new InputError('bad-table', 'pack.ocv.charge', `${charge[0]} to ${charge[n - 1]} given, 0 to 1 expected`)
  }
  for (let i = 0; i < n; i++) {
    requireRange(`ocv.V[${i}]`, V[i], (value) => value > 0, 'a voltage above 0')
    if (i === 0) continue
    requireRange(`ocv.charge[${i}]`, charge[i], (value) => value > charge[i - 1], `more than ${charge[i - 1]}`)
    requireRange(
      `ocv.V[${i}]`,
      V[i],
      (value) => value >= V[i - 1],
      `at least ${V[i - 1]}, as voltage rises with charge`,
    )
  }
}

function energyBelow({ charge, V }: OcvTable, capacityC: number): Float64Array {
  const below = new Float64Array(charge.length)
  for (let i = 1; i < charge.length; i++) {
    below[i] = below[i - 1] + (capacityC * (charge[i] - charge[i - 1]) * (V[i] + V[i - 1])) / 2
  }
  return below
}

/** Index of the OCV table's stretch that holds a state of charge. */
export function stretchOf(pack: Pack, charge: number): number {
  const table = pack.ocv.charge
  let i = 0
  while (i < table.length - 2 && table[i + 1] < charge) i++
  return i
}

/**
 * Voltage of the rested pack.
 *
 * @param charge state of charge by charge, 0..1
 * @returns [V]
 */
export function openCircuitV(pack: Pack, charge: number): number {
  const { charge: x, V } = pack.ocv
  const i = stretchOf(pack, charge)
  return V[i] + ((charge - x[i]) * (V[i + 1] - V[i])) / (x[i + 1] - x[i])
}

/**
 * Energy that the rested pack holds above empty: the exact integral of OCV over charge.
 *
 * @param charge state of charge by charge, 0..1
 * @returns [J]
 */
export function storedJ(pack: Pack, charge: number): number {
  const { charge: x, V } = pack.ocv
  const i = stretchOf(pack, charge)
  return pack.belowJ[i] + (pack.capacityC * (charge - x[i]) * (V[i] + openCircuitV(pack, charge))) / 2
}

/**
 * State of charge that holds an energy; the inverse of storedJ, held within empty and full.
 *
 * @param energyJ energy above empty. [J]
 * @returns state of charge by charge, 0..1
 */
export function chargeAtStoredJ(pack: Pack, energyJ: number): number {
  const { charge: x, V } = pack.ocv
  const below = pack.belowJ
  if (!(energyJ > 0)) return 0
  if (energyJ >= below[below.length - 1]) return 1
  let i = 0
  while (below[i + 1] < energyJ) i++
  const slope = (V[i + 1] - V[i]) / (x[i + 1] - x[i])
  const c = (energyJ - below[i]) / pack.capacityC
  return x[i] + (2 * c) / (V[i] + Math.sqrt(V[i] * V[i] + 2 * slope * c))
}

/**
 * Mean OCV between two states of charge: energy moved over charge moved.
 *
 * @param charge state of charge at the start, 0..1
 * @param delta  change of state of charge, either sign
 * @returns [V]
 */
export function meanOcvV(pack: Pack, charge: number, delta: number): number {
  const from = delta < 0 ? charge + delta : charge
  const to = delta < 0 ? charge : charge + delta
  const last = stretchOf(pack, to)
  let x = from
  let v = openCircuitV(pack, from)
  let area = 0
  for (let i = stretchOf(pack, from); i < last; i++) {
    area += ((pack.ocv.charge[i + 1] - x) * (v + pack.ocv.V[i + 1])) / 2
    x = pack.ocv.charge[i + 1]
    v = pack.ocv.V[i + 1]
  }
  const endMeanV = (v + openCircuitV(pack, to)) / 2
  return to > from ? (area + (to - x) * endMeanV) / (to - from) : endMeanV
}
