import { newPackNow, newPackStep, openCircuitV, PACK_LIMITS, packNow, stepPack, storedJ } from './battery.ts'
import type { Pack, PackLimit, PackStep } from './battery.ts'
import { warmedC } from './pack-heat.ts'

/** How long a limit of the pack bound, and what it refused or withheld. */
export interface PackLimitSum {
  limit: PackLimit
  durationS: number
  J: number
}

/** The pack through the steps of a day. */
export interface PackDay {
  charge: number
  /** Temperature of the cells. [C] */
  tempC: number
  /** Voltage at the terminals. [V] */
  packV: number
  /** Usable energy stored. [J] */
  heldJ: number
  /** What the last step did. */
  step: PackStep
  /** Takes or gives at its terminals over a step, up to its limits; what it refuses is `step.spilledJ`. */
  take(netJ: number, durationS: number, airC: number): void
  /** Warms by the step's losses over the time that it took by the clock. */
  warm(durationS: number, airC: number, isMoving: boolean): void
  /** The limits that bound, in a fixed order. */
  limits(): PackLimitSum[]
}

/**
 * A pack from the opening of a day. Without a heat capacity it is as warm as the air.
 *
 * @param charge usable charge, 0..1
 * @param tempC  its temperature. [C]
 */
export function packDay(pack: Pack, charge: number, tempC: number): PackDay {
  const now = newPackNow()
  const step = newPackStep()
  const boundS = new Float64Array(PACK_LIMITS.length)
  const boundJ = new Float64Array(PACK_LIMITS.length)
  const warming = { startC: 0, airC: 0, heatW: 0, isMoving: false }
  const day: PackDay = {
    charge,
    tempC,
    packV: openCircuitV(pack, charge),
    heldJ: storedJ(pack, charge),
    step,
    take(netJ, durationS, airC) {
      if (pack.heat === undefined) day.tempC = airC
      stepPack(pack, packNow(pack, day.charge, day.tempC, now), netJ / durationS, durationS, step)
      day.charge = step.charge
      day.packV = step.terminalV
      day.heldJ = storedJ(pack, step.charge)
      if (step.limit === null) return
      const at = PACK_LIMITS.indexOf(step.limit)
      boundS[at] += durationS
      boundJ[at] += step.spilledJ + step.shortJ
    },
    warm(durationS, airC, isMoving) {
      if (pack.heat === undefined) return
      warming.startC = day.tempC
      warming.airC = airC
      warming.heatW = step.lossJ / durationS
      warming.isMoving = isMoving
      day.tempC = warmedC(pack.heat, warming, durationS)
    },
    limits: () =>
      PACK_LIMITS.map((limit, i) => ({ limit, durationS: boundS[i], J: boundJ[i] })).filter((l) => l.durationS > 0),
  }
  return day
}
