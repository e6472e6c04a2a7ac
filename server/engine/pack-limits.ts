import { currentAtVoltage, voltsAt } from './ocv-table.ts'
import type { Pack } from './pack.ts'
import type { PackNow } from './pack-now.ts'

/** What may hold a pack back, in the words of the budget. */
export const PACK_LIMITS = [
  'charge-voltage',
  'charge-current',
  'full',
  'fullest-cell',
  'too-cold-to-charge',
  'too-hot-to-charge',
  'discharge-voltage',
  'discharge-current',
  'discharge-power',
  'empty',
  'weakest-cell',
  'too-cold-to-discharge',
  'too-hot-to-discharge',
] as const
export type PackLimit = (typeof PACK_LIMITS)[number]

const roomA = (charge: number, perA: number): number => (perA > 0 ? (1 - charge) / perA : charge < 1 ? Infinity : 0)

const leftA = (charge: number, perA: number): number => (perA > 0 ? -charge / perA : charge > 0 ? -Infinity : 0)

const taperA = (pack: Pack, now: PackNow, perA: number): number =>
  Math.max(currentAtVoltage(pack.ocv, now.charge, perA, now.ohm, pack.chargeMaxV), 0)

const sagA = (pack: Pack, now: PackNow, perA: number): number =>
  Math.min(currentAtVoltage(pack.ocv, now.charge, perA, now.ohm, pack.dischargeMinV), 0)

/** Current at which more current no longer brings more power: OCV = 2R·I. */
const peakA = (pack: Pack, now: PackNow, perA: number): number =>
  currentAtVoltage(pack.ocv, now.charge, perA, 2 * now.ohm, 0)

/** Current at which the first cell reaches its ceiling; where all are alike the terminals' limit says it. */
function ceilingA(pack: Pack, now: PackNow, perA: number): number {
  let leastA = Infinity
  if (pack.groups.length > 1)
    for (let g = 0; g < pack.groups.length; g++) {
      const { ocv } = pack.groups[g]
      leastA = Math.min(leastA, currentAtVoltage(ocv, now.charge, perA, now.groupOhm[g], pack.cellMaxV))
    }
  return Math.max(leastA, 0)
}

/** Current at which the first cell reaches its floor, negative. */
function floorA(pack: Pack, now: PackNow, perA: number): number {
  let mostA = -Infinity
  if (pack.groups.length > 1)
    for (let g = 0; g < pack.groups.length; g++) {
      const { ocv } = pack.groups[g]
      mostA = Math.max(mostA, currentAtVoltage(ocv, now.charge, perA, now.groupOhm[g], pack.cellMinV))
    }
  return Math.min(mostA, 0)
}

/**
 * Largest charging current of a step. [A]
 *
 * @param perA charge gained by one ampere over the step, as a share of the whole
 */
export const mostInA = (pack: Pack, now: PackNow, perA: number): number =>
  Math.min(roomA(now.charge, perA), taperA(pack, now, perA), ceilingA(pack, now, perA), now.chargeMaxA)

/** Largest discharging current of a step, negative. [A] */
export const mostOutA = (pack: Pack, now: PackNow, perA: number): number =>
  Math.max(
    leftA(now.charge, perA),
    sagA(pack, now, perA),
    floorA(pack, now, perA),
    peakA(pack, now, perA),
    -now.dischargeMaxA,
  ) + 0

/** Whether a current keeps every limit to the end of the step; what mostInA and mostOutA say, without solving. */
export function isWithin(pack: Pack, now: PackNow, perA: number, currentA: number): boolean {
  const end = now.charge + currentA * perA
  if (!(end >= 0 && end <= 1)) return false
  const isCharging = currentA > 0
  if (isCharging ? currentA > now.chargeMaxA : -currentA > now.dischargeMaxA) return false
  const endV = voltsAt(pack.ocv, end) + currentA * now.ohm
  if (isCharging ? endV > pack.chargeMaxV : endV < pack.dischargeMinV) return false
  if (pack.groups.length === 1) return true
  for (let g = 0; g < pack.groups.length; g++) {
    const cellV = voltsAt(pack.groups[g].ocv, end) + currentA * now.groupOhm[g]
    if (isCharging ? cellV > pack.cellMaxV : cellV < pack.cellMinV) return false
  }
  return true
}

/** Which limit sets the largest charging current; asked only when one binds. */
export function chargeLimit(pack: Pack, now: PackNow, perA: number): PackLimit {
  const mostA = mostInA(pack, now, perA)
  if (mostA === roomA(now.charge, perA)) return pack.weakestFillsFirst ? 'fullest-cell' : 'full'
  if (mostA === taperA(pack, now, perA)) return 'charge-voltage'
  if (mostA === ceilingA(pack, now, perA)) return 'fullest-cell'
  if (now.chargeMaxA === pack.chargeMaxA) return 'charge-current'
  return now.tempC < (pack.chargeWindow?.fullFromC ?? 0) ? 'too-cold-to-charge' : 'too-hot-to-charge'
}

/** Which limit sets the largest discharging current; asked only when one binds. */
export function dischargeLimit(pack: Pack, now: PackNow, perA: number): PackLimit {
  const mostA = mostOutA(pack, now, perA)
  if (mostA === leftA(now.charge, perA)) return pack.weakestEmptiesFirst ? 'weakest-cell' : 'empty'
  if (mostA === sagA(pack, now, perA)) return 'discharge-voltage'
  if (mostA === floorA(pack, now, perA)) return 'weakest-cell'
  if (mostA === peakA(pack, now, perA)) return 'discharge-power'
  if (now.dischargeMaxA === pack.dischargeMaxA) return 'discharge-current'
  return now.tempC < (pack.dischargeWindow?.fullFromC ?? 0) ? 'too-cold-to-discharge' : 'too-hot-to-discharge'
}
