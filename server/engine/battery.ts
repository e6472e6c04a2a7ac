import { InputError } from './input-error.ts'
import type { Pack } from './pack.ts'
import { chargeLimit, dischargeLimit, isWithin, mostInA, mostOutA } from './pack-limits.ts'
import type { PackLimit } from './pack-limits.ts'
import { newPackNow, packNow } from './pack-now.ts'
import type { PackNow } from './pack-now.ts'
import { meanOcvV, openCircuitV } from './stored-energy.ts'

export { type Pack, type PackInput, preparePack } from './pack.ts'
export { PACK_LIMITS, type PackLimit } from './pack-limits.ts'
export { newPackNow, type PackNow, packNow, SHEET_C } from './pack-now.ts'
export { chargeAtStoredJ, openCircuitV, storedJ } from './stored-energy.ts'

/** What one step did to the pack. Losses, spill and shortage are never negative. */
export interface PackStep {
  charge: number
  /** Mean over the step. */
  currentA: number
  /** At its end. */
  endA: number
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
  endA: 0,
  terminalV: 0,
  lossJ: 0,
  spilledJ: 0,
  shortJ: 0,
  limit: null,
})

/** Longest part of a step in which the taper binds; each part is judged at its own end. [S] */
const TAPER_PART_S = 5

/** Charge gained or lost by one ampere over the step, as a share of the whole. */
const chargePerA = (pack: Pack, durationS: number, isCharging: boolean): number =>
  ((isCharging ? pack.coulombicEfficiency : 1) * durationS) / pack.capacityC

/** Terminal power of a constant current over a step. */
const powerOfA = (pack: Pack, now: PackNow, perA: number, currentA: number): number =>
  currentA * (meanOcvV(pack, now.charge, currentA * perA) + currentA * now.ohm)

/**
 * Highest power the pack takes at its terminals with one constant current over a step: charge current, the taper
 * that keeps terminals and cells at or below their ceilings at the step's end, and the room left.
 *
 * @param now       charge and temperature, from packNow
 * @param durationS length of the step; 0 asks for this instant. [S]
 * @returns at least 0 [W]
 */
export function chargeLimitW(pack: Pack, now: PackNow, durationS: number): number {
  const perA = chargePerA(pack, durationS, true)
  return powerOfA(pack, now, perA, mostInA(pack, now, perA))
}

/**
 * Highest power the pack gives at its terminals over a whole step: discharge current, lowest
 * voltages, the V²/4R peak, and the charge left.
 *
 * @param now       charge and temperature, from packNow
 * @param durationS length of the step; 0 asks for this instant. [S]
 * @returns at least 0 [W]
 */
export function dischargeLimitW(pack: Pack, now: PackNow, durationS: number): number {
  const perA = chargePerA(pack, durationS, false)
  return Math.max(-powerOfA(pack, now, perA, mostOutA(pack, now, perA)), 0)
}

/** Constant current that moves `powerW` within one stretch of the OCV table; NaN where it would leave it. */
function currentInStretch(pack: Pack, now: PackNow, perA: number, powerW: number): number {
  const { charge: x, V } = pack.ocv
  const i = now.stretch
  const halfRise = (0.5 * perA * (V[i + 1] - V[i])) / (x[i + 1] - x[i])
  const under = now.ocvV * now.ocvV + 4 * (now.ohm + halfRise) * powerW
  const currentA = (2 * powerW) / (now.ocvV + Math.sqrt(under))
  const end = now.charge + currentA * perA
  return end >= x[i] && end <= x[i + 1] ? currentA : Number.NaN
}

/** Constant current that moves `powerW`, up to `mostA`: Newton on a rising, convex function. */
function currentForPower(pack: Pack, now: PackNow, perA: number, mostA: number, powerW: number): number {
  const { ohm, ocvV } = now
  let currentA = (2 * powerW) / (ocvV + Math.sqrt(Math.max(ocvV * ocvV + 4 * ohm * powerW, 0)))
  for (let i = 0; i < 30; i++) {
    currentA = mostA < 0 ? Math.max(currentA, mostA) : Math.min(currentA, mostA)
    const excessW = powerOfA(pack, now, perA, currentA) - powerW
    const slopeV = openCircuitV(pack, now.charge + currentA * perA) + 2 * ohm * currentA
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
 * refuses of a charge is spilled, what it withholds of a discharge is short. Resistance and current limits are
 * those at the step's start. Where the taper binds, the step is cut into parts of at most five seconds. No
 * hysteresis, no self-discharge.
 *
 * @param now       charge and temperature at the start, from packNow; is not changed
 * @param powerW    wanted at the terminals, into the pack positive. [W]
 * @param durationS above 0, or 0 for the instant's current and voltage. [S]
 * @param out       is filled and returned
 * @throws InputError when power or duration is out of range
 * @source Thévenin equivalent of order zero, V = OCV + IR (common practice); I = (V − √(V² − 4RP))/2R on discharge
 */
export function stepPack(
  pack: Pack,
  now: PackNow,
  powerW: number,
  durationS: number,
  out: PackStep = newPackStep(),
): PackStep {
  if (!Number.isFinite(powerW)) throw new InputError('out-of-range', 'powerW', `${powerW} given, a number expected`)
  if (!(durationS >= 0)) throw new InputError('out-of-range', 'durationS', `${durationS} given, at least 0 expected`)
  const isBound = onePart(pack, now, powerW, durationS, out)
  out.limit = isBound ? limitOf(pack, now, powerW, durationS) : null
  const tapers = out.limit === 'charge-voltage' || out.limit === 'fullest-cell'
  return tapers && durationS > TAPER_PART_S ? taper(pack, now, powerW, durationS, out) : out
}

function limitOf(pack: Pack, now: PackNow, powerW: number, durationS: number): PackLimit {
  const perA = chargePerA(pack, durationS, powerW > 0)
  return powerW > 0 ? chargeLimit(pack, now, perA) : dischargeLimit(pack, now, perA)
}

/** A step or part of one with one current; all but the limit's name. @returns whether a limit binds */
function onePart(pack: Pack, now: PackNow, powerW: number, durationS: number, out: PackStep): boolean {
  const isCharging = powerW > 0
  const perA = chargePerA(pack, durationS, isCharging)
  let currentA = currentInStretch(pack, now, perA, powerW)
  let isBound = false
  out.spilledJ = 0
  out.shortJ = 0
  if (!isWithin(pack, now, perA, currentA)) {
    const mostA = isCharging ? mostInA(pack, now, perA) : mostOutA(pack, now, perA)
    const boundW = powerOfA(pack, now, perA, mostA)
    isBound = isCharging ? powerW > boundW : powerW < boundW
    if (isBound) {
      currentA = mostA
      if (isCharging) out.spilledJ = (powerW - boundW) * durationS
      else out.shortJ = (boundW - powerW) * durationS
    } else currentA = currentForPower(pack, now, perA, mostA, powerW)
  }
  const ocvV = meanOcvV(pack, now.charge, currentA * perA)
  const notKept = isCharging ? 1 - pack.coulombicEfficiency : 0
  out.charge = Math.min(Math.max(now.charge + currentA * perA, 0), 1)
  out.currentA = currentA
  out.endA = currentA
  out.terminalV = ocvV + currentA * now.ohm
  out.lossJ = currentA * (currentA * now.ohm + notKept * ocvV) * durationS
  return isBound
}

// Scratch for the parts of a step; a step is never re-entered.
const partNow = newPackNow()

/** A step in which the taper binds, part by part: the current falls with the room under the ceiling. */
function taper(pack: Pack, now: PackNow, powerW: number, durationS: number, out: PackStep): PackStep {
  const parts = Math.ceil(durationS / TAPER_PART_S)
  const partS = durationS / parts
  let movedC = 0
  let takenJ = 0
  let lossJ = 0
  let spilledJ = 0
  out.charge = now.charge
  for (let part = 0; part < parts; part++) {
    onePart(pack, packNow(pack, out.charge, now.tempC, partNow), powerW, partS, out)
    movedC += out.currentA * partS
    takenJ += out.currentA * out.terminalV * partS
    lossJ += out.lossJ
    spilledJ += out.spilledJ
  }
  out.currentA = movedC / durationS
  if (movedC > 0) out.terminalV = takenJ / movedC
  out.lossJ = lossJ
  out.spilledJ = spilledJ
  return out
}
