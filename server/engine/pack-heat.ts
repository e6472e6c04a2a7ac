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
  const lossWPerC = isMoving ? heat.movingWPerC : heat.parkedWPerC
  if (lossWPerC === 0) return startC + (heatW * durationS) / heat.capacityJPerC
  const steadyC = airC + heatW / lossWPerC
  return steadyC + (startC - steadyC) * Math.exp((-lossWPerC * durationS) / heat.capacityJPerC)
}

/**
 * The pack's temperature after standing idle, the air going evenly from what it was to what it is.
 *
 * Exact for such air: T = air − s·τ + (T₀ − air₀ + s·τ)·exp(−t/τ), s the air's change per second, τ = C/G parked.
 *
 * @param last what was last known
 * @param now  the air's temperature [C] and the instant
 * @returns [C]
 */
export function idleC(heat: PackHeat, last: Warmth, now: { airC: number; atMs: number }): number {
  const durationS = (now.atMs - last.atMs) / 1000
  if (!(durationS > 0) || heat.parkedWPerC === 0) return last.packC
  const tauS = heat.capacityJPerC / heat.parkedWPerC
  const lagC = ((now.airC - last.airC) / durationS) * tauS
  return now.airC - lagC + (last.packC - last.airC + lagC) * Math.exp(-durationS / tauS)
}
