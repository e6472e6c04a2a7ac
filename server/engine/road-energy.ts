import type { Course } from './course.ts'
import { wheelToBus } from './drive.ts'
import type { BusPower, Drive } from './drive.ts'
import type { Air } from './motion.ts'
import { climbingN, dragN, kineticJ, rollingN, tyreFactor } from './road.ts'
import type { RoadLoad } from './road.ts'
import type { Steps } from './steps.ts'

/** Energy of one step on the road. busJ = rolling + drag + climbing + braked + loss + change of motion. [J] */
export interface RoadEnergy {
  busJ: number
  rollingJ: number
  dragJ: number
  climbingJ: number
  brakedJ: number
  lossJ: number
  /** How long a change of speed in this step really takes, 0 where there is none; may be longer than the step. [S] */
  changeS: number
}

/** A result to fill again and again. */
export const newRoadEnergy = (): RoadEnergy => ({
  busJ: 0,
  rollingJ: 0,
  dragJ: 0,
  climbingJ: 0,
  brakedJ: 0,
  lossJ: 0,
  changeS: 0,
})

/** Deceleration to a halt. [m/s²] Common practice, no source. */
export const BRAKING_MPS2 = 1

/** Acceleration from a halt. [m/s²] Common practice, no source. */
export const STARTING_MPS2 = 0.6

// Scratch for wheelToBus; a step is never re-entered.
const bus: BusPower = { busW: 0, lossW: 0, brakedW: 0 }

/**
 * What the road asks of the bus in one step of a drive; all zero when parked.
 *
 * The work at the wheels is rolling, drag, climbing and the change of kinetic energy against the step
 * before; a drive starts from rest and is braked to rest at its end. Each expected halt brakes to rest
 * and accelerates again. `changeS` says how long a change of speed takes: in a step shorter than that motor
 * and pack see the energy over that time, not as a blow.
 *
 * @param step  which step, its length, the speed in the step before (0 at a start), whether the car halts at its end
 * @param out   is filled and returned
 */
export function roadEnergy(
  car: { load: RoadLoad; drive: Drive },
  day: { course: Course; steps: Steps; air: Air },
  step: { index: number; durationS: number; beforeMps: number; endsInHalt: boolean },
  out: RoadEnergy,
): RoadEnergy {
  const { steps, air, course } = day
  const { index: i, durationS } = step
  const speedMps = steps.speedMps[i]
  const { load, drive } = car
  const piece = steps.piece[i]
  // Places run along the map; the wheels run along the slope.
  const lengthM = (steps.toM[i] - steps.fromM[i]) / Math.cos(steps.gradeRad[i])
  const kinetic = kineticJ(load, speedMps)
  const surface = course.pieces.surfaceFactor[piece] * tyreFactor(load, air.airC[i])
  out.rollingJ = rollingN(load, speedMps, steps.gradeRad[i], surface) * lengthM
  out.dragJ = dragN(load, speedMps, air.headwindMps[i], air.crosswindMps[i], air.densityKgM3[i]) * lengthM
  out.climbingJ = climbingN(load, steps.gradeRad[i]) * lengthM
  const movedJ = out.rollingJ + out.dragJ + out.climbingJ + kinetic - kineticJ(load, step.beforeMps)
  const gainMps = speedMps - step.beforeMps
  out.changeS = gainMps > 0 ? gainMps / STARTING_MPS2 : -gainMps / BRAKING_MPS2
  const overS = Math.max(durationS, out.changeS)
  wheelToBus(drive, movedJ / overS, speedMps, bus)
  out.busJ = bus.busW * overS
  out.lossJ = bus.lossW * overS
  out.brakedJ = bus.brakedW * overS
  if (step.endsInHalt) out.changeS += speedMps / BRAKING_MPS2
  const halts = course.pieces.haltsPerM[piece] * lengthM
  if (halts > 0)
    addChange(out, drive, { kineticJ: kinetic, meanMps: speedMps / 2, overS: speedMps / STARTING_MPS2, times: halts })
  const stops = halts + (step.endsInHalt ? 1 : 0)
  if (stops > 0)
    addChange(out, drive, { kineticJ: -kinetic, meanMps: speedMps / 2, overS: speedMps / BRAKING_MPS2, times: stops })
  return out
}

/** Books `times` accelerations (positive) or brakings (negative) of one kinetic energy each. */
function addChange(
  out: RoadEnergy,
  drive: Drive,
  change: { kineticJ: number; meanMps: number; overS: number; times: number },
): void {
  if (!(change.overS > 0)) return
  const totalS = change.overS * change.times
  wheelToBus(drive, change.kineticJ / change.overS, change.meanMps, bus)
  out.busJ += bus.busW * totalS
  out.lossJ += bus.lossW * totalS
  out.brakedJ += bus.brakedW * totalS
}
