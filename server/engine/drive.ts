import { driveLossW, prepareLosses } from './drive-loss.ts'
import type { DriveLosses } from './drive-loss.ts'
import { InputError } from './input-error.ts'
import { type Going, holdingN, type RoadLoad } from './road.ts'

/** Motor and its electronics between the bus and the road. */
export interface Drive {
  /** Power at the wheels over power from the bus, above 0 up to 1. */
  efficiency: number
  /** Power into the bus over power taken at the wheels, 0 (none) to 1. */
  regenEfficiency: number
  /** Most power at the wheels. */
  motorMaxW: number
  /** Most force at the wheels, from the torque limit and the wheel's radius. */
  motorMaxN: number
  /** Most power that regeneration puts into the bus. */
  regenMaxW: number
  /** Losses by force and speed, in place of the two efficiencies. */
  losses?: DriveLosses
  /** Most power at the wheels with which the motor brakes; no limit of its own where left out. */
  brakingMaxW?: number
  /** Most force at the wheels with which the motor brakes; motorMaxN where left out. */
  brakingMaxN?: number
  /** Speed below which the motor does not brake, 0 where left out. */
  brakingFromMps?: number
  /** Highest speed that the motor turns at; none where left out. */
  topMps?: number
}

/** Where the wheels' power goes: busW = wheelW + lossW + brakedW; the bus gives when busW is positive. */
export interface BusPower {
  busW: number
  lossW: number
  brakedW: number
}

/**
 * A drive that the functions below can rely on.
 *
 * @throws InputError naming the field when a number is missing or out of range
 */
export function prepareDrive(drive: Drive): Drive {
  const check = (name: Exclude<keyof Drive, 'losses'>, isGood: boolean, wanted: string): void => {
    const given = String(drive[name])
    if (!isGood) throw new InputError('out-of-range', `drive.${name}`, `${given} given, ${wanted} expected`)
  }
  check('efficiency', drive.efficiency > 0 && drive.efficiency <= 1, 'above 0 up to 1')
  check('regenEfficiency', drive.regenEfficiency >= 0 && drive.regenEfficiency <= 1, '0 to 1')
  check('motorMaxW', drive.motorMaxW > 0, 'a number above 0')
  check('motorMaxN', drive.motorMaxN > 0, 'a number above 0')
  check('regenMaxW', drive.regenMaxW >= 0, 'a number of at least 0')
  const { brakingMaxW = Infinity, brakingMaxN = drive.motorMaxN, brakingFromMps = 0, topMps = Infinity } = drive
  check('brakingMaxW', brakingMaxW >= 0, 'a number of at least 0')
  check('brakingMaxN', brakingMaxN >= 0, 'a number of at least 0')
  check('brakingFromMps', brakingFromMps >= 0, 'a number of at least 0')
  check('topMps', topMps > 0, 'a number above 0')
  const losses = drive.losses === undefined ? {} : { losses: prepareLosses(drive.losses) }
  return { ...drive, brakingMaxW, brakingMaxN, brakingFromMps, topMps, ...losses }
}

/**
 * Power at the bus for a power at the wheels; a negative one is regenerated within the limits, the rest is braked.
 *
 * With one efficiency each way, or with losses by force and speed. The motor's limits in driving are not asked
 * here: see attainableSpeedMps. A motor whose losses exceed what it takes draws from the bus even while it brakes.
 *
 * @param wheelW   into the wheels positive. [W]
 * @param speedMps at least 0. [m/s]
 * @param out      is filled and returned
 */
export function wheelToBus(
  drive: Drive,
  wheelW: number,
  speedMps: number,
  out: BusPower = { busW: 0, lossW: 0, brakedW: 0 },
): BusPower {
  const { losses } = drive
  if (wheelW >= 0) {
    out.busW = losses === undefined ? wheelW / drive.efficiency : wheelW + driveLossW(losses, wheelW, speedMps)
    out.lossW = out.busW - wheelW
    out.brakedW = 0
    return out
  }
  const offeredW = motorBrakingW(drive, -wheelW, speedMps)
  const takenW =
    losses === undefined ? takenByShareW(drive, offeredW) : takenByLossesW(drive, losses, offeredW, speedMps)
  const leftW = losses === undefined ? takenW * drive.regenEfficiency : takenW - driveLossW(losses, takenW, speedMps)
  const gainedW = Math.min(leftW, drive.regenMaxW)
  out.busW = 0 - gainedW
  out.lossW = takenW - gainedW
  out.brakedW = Math.max(-wheelW - takenW, 0)
  return out
}

/** What the motor may take of a braking power, by its own limits. [W] */
function motorBrakingW(drive: Drive, wantedW: number, speedMps: number): number {
  const { brakingMaxW = Infinity, brakingMaxN = drive.motorMaxN, brakingFromMps = 0 } = drive
  return speedMps < brakingFromMps ? 0 : Math.min(wantedW, brakingMaxW, brakingMaxN * speedMps)
}

/** What is taken at the wheels so that the bus gets no more than its limit. [W] */
const takenByShareW = ({ regenEfficiency, regenMaxW }: Drive, offeredW: number): number =>
  regenEfficiency > 0 ? Math.min(offeredW, regenMaxW / regenEfficiency) : 0

/** Rounds of closing in on the bus limit: each leaves the share of what a watt more would lose. */
const LIMIT_ROUNDS = 8

function takenByLossesW(drive: Drive, losses: DriveLosses, offeredW: number, speedMps: number): number {
  if (drive.regenMaxW <= 0) return 0
  if (offeredW - driveLossW(losses, offeredW, speedMps) <= drive.regenMaxW) return offeredW
  let takenW = drive.regenMaxW
  for (let i = 0; i < LIMIT_ROUNDS; i++)
    takenW = Math.min(drive.regenMaxW + driveLossW(losses, takenW, speedMps), offeredW)
  return takenW
}

/** Whether the motor can hold a speed here: force and power within its limits. */
function canHold(load: RoadLoad, drive: Drive, going: Going, speedMps: number): boolean {
  const forceN = holdingN(load, speedMps, going)
  if (speedMps > (drive.topMps ?? Infinity)) return false
  return forceN <= drive.motorMaxN && forceN * speedMps <= drive.motorMaxW
}

/**
 * Highest speed up to the wanted one that the motor can hold here: 0 when it cannot hold any.
 *
 * The holding force rises with speed, so each limit is met at one speed only; halving finds it to the
 * last digit, from below.
 *
 * @param wantedMps at least 0. [m/s]
 * @returns [m/s]
 * @throws InputError when wantedMps is no finite number of at least 0
 */
export function attainableSpeedMps(load: RoadLoad, drive: Drive, going: Going, wantedMps: number): number {
  if (!(wantedMps >= 0 && wantedMps < Infinity)) {
    throw new InputError('out-of-range', 'wantedMps', `${wantedMps} given, a number of at least 0 expected`)
  }
  if (canHold(load, drive, going, wantedMps)) return wantedMps
  let low = 0
  let high = wantedMps
  for (;;) {
    const middle = (low + high) / 2
    if (middle <= low || middle >= high || high < 1e-6) return low
    if (canHold(load, drive, going, middle)) low = middle
    else high = middle
  }
}
