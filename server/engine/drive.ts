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
  const check = (name: keyof Drive, isGood: boolean, wanted: string): void => {
    if (!isGood) throw new InputError('out-of-range', `drive.${name}`, `${drive[name]} given, ${wanted} expected`)
  }
  check('efficiency', drive.efficiency > 0 && drive.efficiency <= 1, 'above 0 up to 1')
  check('regenEfficiency', drive.regenEfficiency >= 0 && drive.regenEfficiency <= 1, '0 to 1')
  check('motorMaxW', drive.motorMaxW > 0, 'a number above 0')
  check('motorMaxN', drive.motorMaxN > 0, 'a number above 0')
  check('regenMaxW', drive.regenMaxW >= 0, 'a number of at least 0')
  return { ...drive }
}

/**
 * Power at the bus for a power at the wheels; a negative one is regenerated up to the limit, the rest is braked.
 *
 * One efficiency each way, the same at every torque and speed. The motor's limits are not asked here:
 * see attainableSpeedMps.
 *
 * @param wheelW into the wheels positive. [W]
 * @param out    is filled and returned
 */
export function wheelToBus(drive: Drive, wheelW: number, out: BusPower = { busW: 0, lossW: 0, brakedW: 0 }): BusPower {
  if (wheelW >= 0) {
    out.busW = wheelW / drive.efficiency
    out.lossW = out.busW - wheelW
    out.brakedW = 0
    return out
  }
  const gainedW = Math.min(-wheelW * drive.regenEfficiency, drive.regenMaxW)
  const takenW = gainedW > 0 ? gainedW / drive.regenEfficiency : 0
  out.busW = 0 - gainedW
  out.lossW = takenW - gainedW
  out.brakedW = Math.max(-wheelW - takenW, 0)
  return out
}

/** Whether the motor can hold a speed here: force and power within its limits. */
function canHold(load: RoadLoad, drive: Drive, going: Going, speedMps: number): boolean {
  const forceN = holdingN(load, speedMps, going)
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
