import { InputError } from './input-error.ts'

/** The pack as one warm body. */
export interface PackHeat {
  /** Heat that warms it by one degree. [J/C] */
  capacityJPerC: number
  /** Heat it gives to the air per degree above it, while the car moves and while it stands. [W/C] */
  movingWPerC: number
  parkedWPerC: number
}

/** The pack's temperature when it was last known, and the air's then. */
export interface Warmth {
  packC: number
  airC: number
  atMs: number
}

/** @throws InputError naming the number that is out of range */
export function checkHeat(name: string, heat: PackHeat): void {
  const check = (part: keyof PackHeat, isGood: boolean, wanted: string): void => {
    if (!isGood) throw new InputError('out-of-range', `${name}.${part}`, `${heat[part]} given, ${wanted} expected`)
  }
  check('capacityJPerC', heat.capacityJPerC > 0 && Number.isFinite(heat.capacityJPerC), 'a number above 0')
  check('movingWPerC', heat.movingWPerC >= 0 && Number.isFinite(heat.movingWPerC), 'at least 0')
  check('parkedWPerC', heat.parkedWPerC >= 0 && Number.isFinite(heat.parkedWPerC), 'at least 0')
}

/** One step of the warm body; all constant over the step. */
export interface Warming {
  startC: number
  airC: number
  /** What the pack's losses put in. [W] */
  heatW: number
  isMoving: boolean
}

/**
 * The pack's temperature after a step: C·dT/dt = heat − G·(T − air), solved exactly.
 *
 * @param durationS [S]
 * @returns [C]
 * @source one thermal node (common practice): steady rise heat/G, time constant C/G
 */
export function warmedC(heat: PackHeat, { startC, airC, heatW, isMoving }: Warming, durationS: number): number {
  const decays = ((isMoving ? heat.movingWPerC : heat.parkedWPerC) * durationS) / heat.capacityJPerC
  const gainC = (heatW * durationS) / heat.capacityJPerC
  return startC + (airC - startC) * -Math.expm1(-decays) + gainC * meanDecay(decays)
}

/** Mean of exp(−t) from 0 to k: (1 − exp(−k))/k. */
const meanDecay = (k: number): number => (k > 0 ? -Math.expm1(-k) / k : 1)

/**
 * The pack's temperature after standing idle, the air going evenly from what it was to what it is.
 *
 * Exact for such air: T = air + (T₀ − air₀)·exp(−k) − (air − air₀)·(1 − exp(−k))/k, k = G·t/C parked.
 *
 * @param last what was last known
 * @param now  the air's temperature [C] and the instant
 * @returns [C]
 */
export function idleC(heat: PackHeat, last: Warmth, now: { airC: number; atMs: number }): number {
  const decays = (heat.parkedWPerC * Math.max(now.atMs - last.atMs, 0)) / 1000 / heat.capacityJPerC
  const awayC = (last.packC - last.airC) * Math.exp(-decays)
  return now.airC + awayC - (now.airC - last.airC) * meanDecay(decays)
}
