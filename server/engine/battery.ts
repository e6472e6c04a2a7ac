import { InputError } from './input-error.ts'
import { meanOcvV, openCircuitV, type Pack, stretchOf } from './pack.ts'

export {
  chargeAtStoredJ,
  type OcvTable,
  openCircuitV,
  type Pack,
  type PackInput,
  preparePack,
  storedJ,
} from './pack.ts'

export type PackLimit =
  | 'charge-voltage'
  | 'charge-current'
  | 'full'
  | 'discharge-voltage'
  | 'discharge-current'
  | 'discharge-power'
  | 'empty'

/** What one step did to the pack. Losses, spill and shortage are never negative. */
export interface PackStep {
  charge: number
  currentA: number
  /** Mean over the step, so that current x voltage is the power at the terminals. */
  terminalV: number
  lossJ: number
  spilledJ: number
  shortJ: number
  limit: PackLimit | null
}

/** A result to pass to stepPack again and again, so that a long day makes no garbage. */
export const newPackStep = (): PackStep => ({
  charge: 0,
  currentA: 0,
  terminalV: 0,
  lossJ: 0,
  spilledJ: 0,
  shortJ: 0,
  limit: null,
})

/**
 * Current at which OCV after the step and the drop over `ohm` meet `targetV`: V(x) + ohm·I = targetV.
 * Walks the OCV table away from `charge`, `perA` of charge for each ampere; positive charges.
 */
function currentAtVoltage(pack: Pack, charge: number, perA: number, ohm: number, targetV: number): number {
  const { charge: x, V } = pack.ocv
  const startV = openCircuitV(pack, charge)
  const up = targetV > startV
  if (perA === 0) return ohm > 0 ? (targetV - startV) / ohm : up ? Infinity : -Infinity
  let i = stretchOf(pack, charge)
  for (;;) {
    const slope = (V[i + 1] - V[i]) / (x[i + 1] - x[i])
    const currentA = (targetV - V[i] - slope * (charge - x[i])) / (slope * perA + ohm)
    const end = charge + currentA * perA
    const next = up ? i + 1 : i - 1
    if ((up ? end <= x[i + 1] : end >= x[i]) || next < 0 || next > x.length - 2) return currentA
    i = next
  }
}

/** Charge gained or lost by one ampere over the step, as a share of the whole. */
const chargePerA = (pack: Pack, durationS: number, isCharging: boolean): number =>
  ((isCharging ? pack.coulombicEfficiency : 1) * durationS) / pack.capacityC

/** Terminal power of a constant current over a step. */
const powerOfA = (pack: Pack, charge: number, perA: number, currentA: number): number =>
  currentA * (meanOcvV(pack, charge, currentA * perA) + currentA * pack.resistanceOhm)

const roomA = (charge: number, perA: number): number => (perA > 0 ? (1 - charge) / perA : charge < 1 ? Infinity : 0)

const leftA = (charge: number, perA: number): number => (perA > 0 ? -charge / perA : charge > 0 ? -Infinity : 0)

const taperA = (pack: Pack, charge: number, perA: number): number =>
  Math.max(currentAtVoltage(pack, charge, perA, pack.resistanceOhm, pack.chargeMaxV), 0)

const sagA = (pack: Pack, charge: number, perA: number): number =>
  Math.min(currentAtVoltage(pack, charge, perA, pack.resistanceOhm, pack.dischargeMinV), 0)

/** Current at which more current no longer brings more power: OCV = 2R·I. */
const peakA = (pack: Pack, charge: number, perA: number): number =>
  currentAtVoltage(pack, charge, perA, 2 * pack.resistanceOhm, 0)

/** Largest charging current of a step. */
const mostInA = (pack: Pack, charge: number, perA: number): number =>
  Math.min(roomA(charge, perA), taperA(pack, charge, perA), pack.chargeMaxA)

/** Largest discharging current of a step, negative. */
const mostOutA = (pack: Pack, charge: number, perA: number): number =>
  Math.max(leftA(charge, perA), sagA(pack, charge, perA), peakA(pack, charge, perA), -pack.dischargeMaxA) + 0

/** Which limit sets the largest current; asked only when one binds. */
function limitOf(pack: Pack, charge: number, perA: number, isCharging: boolean): PackLimit {
  if (isCharging) {
    const mostA = mostInA(pack, charge, perA)
    if (mostA === roomA(charge, perA)) return 'full'
    return mostA === taperA(pack, charge, perA) ? 'charge-voltage' : 'charge-current'
  }
  const mostA = mostOutA(pack, charge, perA)
  if (mostA === leftA(charge, perA)) return 'empty'
  if (mostA === sagA(pack, charge, perA)) return 'discharge-voltage'
  return mostA === peakA(pack, charge, perA) ? 'discharge-power' : 'discharge-current'
}

/**
 * Highest power the pack takes at its terminals over a whole step: charge current, the taper that
 * keeps the terminals at or below chargeMaxV at the step's end, and the room left.
 *
 * @param charge    state of charge by charge, 0..1
 * @param durationS length of the step; 0 asks for this instant. [S]
 * @returns at least 0 [W]
 */
export function chargeLimitW(pack: Pack, charge: number, durationS: number): number {
  const perA = chargePerA(pack, durationS, true)
  return powerOfA(pack, charge, perA, mostInA(pack, charge, perA))
}

/**
 * Highest power the pack gives at its terminals over a whole step: discharge current, lowest
 * voltage, the V²/4R peak, and the charge left.
 *
 * @param charge    state of charge by charge, 0..1
 * @param durationS length of the step; 0 asks for this instant. [S]
 * @returns at least 0 [W]
 */
export function dischargeLimitW(pack: Pack, charge: number, durationS: number): number {
  const perA = chargePerA(pack, durationS, false)
  return Math.max(-powerOfA(pack, charge, perA, mostOutA(pack, charge, perA)), 0)
}

/** Constant current that moves `powerW`, up to `mostA`: Newton on a rising, convex function. */
function currentForPower(pack: Pack, charge: number, perA: number, mostA: number, powerW: number): number {
  const ohm = pack.resistanceOhm
  const startV = openCircuitV(pack, charge)
  let currentA = (2 * powerW) / (startV + Math.sqrt(Math.max(startV * startV + 4 * ohm * powerW, 0)))
  for (let i = 0; i < 30; i++) {
    currentA = mostA < 0 ? Math.max(currentA, mostA) : Math.min(currentA, mostA)
    const excessW = powerOfA(pack, charge, perA, currentA) - powerW
    const slopeV = openCircuitV(pack, charge + currentA * perA) + 2 * ohm * currentA
    if (Math.abs(excessW) <= 1e-14 * Math.abs(powerW) || !(slopeV > 0)) break
    currentA -= excessW / slopeV
  }
  return currentA
}

/**
 * One step of the pack at constant power: nothing is lost without a name.
 *
 * OCV and resistance in series, constant current over the step, solved with the step's mean OCV, so
 * that stored energy after less before = powerW·durationS − lossJ − spilledJ + shortJ. What a limit
 * refuses of a charge is spilled, what it withholds of a discharge is short. No temperature, no
 * hysteresis, no self-discharge; steps up to some minutes (the taper is judged at the step's end).
 *
 * @param charge    state of charge by charge at the start, 0..1
 * @param powerW    wanted at the terminals, into the pack positive. [W]
 * @param durationS above 0, or 0 for the instant's current and voltage. [S]
 * @param out       is filled and returned
 * @throws InputError when charge, power or duration is out of range
 * @source Thévenin equivalent of order zero, V = OCV + IR (common practice); I = (V − √(V² − 4RP))/2R on discharge
 */
export function stepPack(
  pack: Pack,
  charge: number,
  powerW: number,
  durationS: number,
  out: PackStep = newPackStep(),
): PackStep {
  if (!(charge >= 0 && charge <= 1)) throw new InputError('out-of-range', 'charge', `${charge} given, 0..1 expected`)
  if (!Number.isFinite(powerW)) throw new InputError('out-of-range', 'powerW', `${powerW} given, a number expected`)
  if (!(durationS >= 0)) throw new InputError('out-of-range', 'durationS', `${durationS} given, at least 0 expected`)
  const isCharging = powerW > 0
  const perA = chargePerA(pack, durationS, isCharging)
  const mostA = isCharging ? mostInA(pack, charge, perA) : mostOutA(pack, charge, perA)
  const boundW = powerOfA(pack, charge, perA, mostA)
  const isBound = isCharging ? powerW > boundW : powerW < boundW
  const currentA = isBound ? mostA : currentForPower(pack, charge, perA, mostA, powerW)
  const ocvV = meanOcvV(pack, charge, currentA * perA)
  const notKept = isCharging ? 1 - pack.coulombicEfficiency : 0
  out.charge = Math.min(Math.max(charge + currentA * perA, 0), 1)
  out.currentA = currentA
  out.terminalV = ocvV + currentA * pack.resistanceOhm
  out.lossJ = currentA * (currentA * pack.resistanceOhm + notKept * ocvV) * durationS
  out.spilledJ = isBound && isCharging ? (powerW - boundW) * durationS : 0
  out.shortJ = isBound && !isCharging ? (boundW - powerW) * durationS : 0
  out.limit = isBound ? limitOf(pack, charge, perA, isCharging) : null
  return out
}
