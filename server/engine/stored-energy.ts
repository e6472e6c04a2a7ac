import { stretchIn, voltsAt } from './ocv-table.ts'
import type { Pack } from './pack.ts'

/**
 * Voltage of the rested pack.
 *
 * @param charge usable charge, 0..1
 * @returns [V]
 */
export const openCircuitV = (pack: Pack, charge: number): number => voltsAt(pack.ocv, charge)

/**
 * Energy that the rested pack holds above empty: the exact integral of OCV over charge.
 *
 * @param charge usable charge, 0..1
 * @returns [J]
 */
export function storedJ(pack: Pack, charge: number): number {
  const { charge: x, V } = pack.ocv
  const i = stretchIn(x, charge)
  const endV = V[i] + ((charge - x[i]) * (V[i + 1] - V[i])) / (x[i + 1] - x[i])
  return pack.belowJ[i] + (pack.capacityC * (charge - x[i]) * (V[i] + endV)) / 2
}

/**
 * Usable charge that holds an energy; the inverse of storedJ, held within empty and full.
 *
 * @param energyJ energy above empty. [J]
 * @returns usable charge, 0..1
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
 * @param charge usable charge at the start, 0..1
 * @param delta  change of charge, either sign
 * @returns [V]
 */
export function meanOcvV(pack: Pack, charge: number, delta: number): number {
  const from = delta < 0 ? charge + delta : charge
  const to = delta < 0 ? charge : charge + delta
  const { charge: x, V } = pack.ocv
  const last = stretchIn(x, to)
  let at = from
  let v = voltsAt(pack.ocv, from)
  let area = 0
  for (let i = stretchIn(x, from); i < last; i++) {
    area += ((x[i + 1] - at) * (v + V[i + 1])) / 2
    at = x[i + 1]
    v = V[i + 1]
  }
  const endMeanV = (v + voltsAt(pack.ocv, to)) / 2
  return to > from ? (area + (to - at) * endMeanV) / (to - from) : endMeanV
}
