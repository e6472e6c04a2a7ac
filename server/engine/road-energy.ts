import type { Course } from './course.ts'
import { wheelToBus } from './drive.ts'
import type { BusPower, Drive } from './drive.ts'
import type { MotionBounds } from './driven-road.ts'
import type { Air } from './motion.ts'
import { climbingN, dragN, rollingN, tyreFactor } from './road.ts'
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
}

/** A result to fill again and again. */
export const newRoadEnergy = (): RoadEnergy => ({
  busJ: 0,
  rollingJ: 0,
  dragJ: 0,
  climbingJ: 0,
  brakedJ: 0,
  lossJ: 0,
})

/** The car as the road sees it. */
export interface RoadCar {
  load: RoadLoad
  drive: Drive
  bounds: MotionBounds
}

/** Parts into which a step of changing speed is cut; braking has the kinks of the motor's limits in it. */
const BRAKING_PARTS = 8
const STARTING_PARTS = 2

/** Gauss' two points in a part: exact for the third power of speed. */
const GAUSS = [0.5 - Math.sqrt(1 / 12), 0.5 + Math.sqrt(1 / 12)]

// Scratch; a step is never re-entered.
const bus: BusPower = { busW: 0, lossW: 0, brakedW: 0 }
const here = { gradeRad: 0, surfaceFactor: 1, headwindMps: 0, crosswindMps: 0, densityKgM3: 0 }

/**
 * What the road asks of the bus in one step of a drive.
 *
 * The work at the wheels is rolling, drag, climbing and the change of kinetic energy at the step's one
 * acceleration; where the speed changes, power is summed over the times of the step and not taken at its mean.
 * Each expected halt brakes from the speed it meets to rest and accelerates again.
 *
 * @param i    which step
 * @param out  is filled and returned
 */
export function roadEnergy(
  car: RoadCar,
  day: { course: Course; steps: Steps; air: Air },
  i: number,
  out: RoadEnergy,
): RoadEnergy {
  const { steps, air, course } = day
  const fromMps = steps.fromMps[i]
  const toMps = steps.toMps[i]
  here.gradeRad = steps.gradeRad[i]
  here.surfaceFactor = course.pieces.surfaceFactor[steps.piece[i]] * tyreFactor(car.load, air.airC[i])
  here.headwindMps = air.headwindMps[i]
  here.crosswindMps = air.crosswindMps[i]
  here.densityKgM3 = air.densityKgM3[i]
  out.busJ = out.rollingJ = out.dragJ = out.climbingJ = out.brakedJ = out.lossJ = 0
  // Places run along the map; the wheels run along the slope.
  const lengthM = (steps.toM[i] - steps.fromM[i]) / Math.cos(here.gradeRad)
  const motionS = (2 * lengthM) / (fromMps + toMps)
  if (fromMps === toMps) addMoment(out, car, fromMps, 0, motionS)
  else addChange(out, car, { fromMps, toMps, motionS, times: 1, isOnRoad: true })
  const halts = course.pieces.haltsPerM[steps.piece[i]] * lengthM
  if (halts > 0) addHalts(out, car, Math.sqrt((fromMps * fromMps + toMps * toMps) / 2), halts)
  return out
}

/** A change of speed at one acceleration, so many times; on the road, or what its motion alone takes. */
function addChange(
  out: RoadEnergy,
  car: RoadCar,
  change: { fromMps: number; toMps: number; motionS: number; times: number; isOnRoad: boolean },
): void {
  const { fromMps, toMps, motionS, times, isOnRoad } = change
  const parts = toMps < fromMps ? BRAKING_PARTS : STARTING_PARTS
  const { massKg, rotatingFactor } = car.load
  const inertiaN = (massKg * rotatingFactor * (toMps - fromMps)) / motionS
  const momentS = (motionS * times) / (2 * parts)
  for (let part = 0; part < parts; part++)
    for (const point of GAUSS) {
      const speedMps = fromMps + (toMps - fromMps) * ((part + point) / parts)
      if (isOnRoad) addMoment(out, car, speedMps, inertiaN, momentS)
      else addPower(out, car.drive, inertiaN * speedMps, speedMps, momentS)
    }
}

/** A time at one speed on this road, with the force that the change of speed takes. */
function addMoment(
  out: RoadEnergy,
  { load, drive }: RoadCar,
  speedMps: number,
  inertiaN: number,
  durationS: number,
): void {
  const wayM = speedMps * durationS
  const rolling = rollingN(load, speedMps, here.gradeRad, here.surfaceFactor)
  const drag = dragN(load, speedMps, here.headwindMps, here.crosswindMps, here.densityKgM3)
  const climbing = climbingN(load, here.gradeRad)
  out.rollingJ += rolling * wayM
  out.dragJ += drag * wayM
  out.climbingJ += climbing * wayM
  addPower(out, drive, (rolling + drag + climbing + inertiaN) * speedMps, speedMps, durationS)
}

function addPower(out: RoadEnergy, drive: Drive, wheelW: number, speedMps: number, durationS: number): void {
  wheelToBus(drive, wheelW, speedMps, bus)
  out.busJ += bus.busW * durationS
  out.lossJ += bus.lossW * durationS
  out.brakedJ += bus.brakedW * durationS
}

/** Expected halts from a speed: braking to rest and starting again. */
function addHalts(out: RoadEnergy, car: RoadCar, speedMps: number, times: number): void {
  const { accelerationMps2, brakingMps2 } = car.bounds
  const braking = { fromMps: speedMps, toMps: 0, motionS: speedMps / brakingMps2 }
  const starting = { fromMps: 0, toMps: speedMps, motionS: speedMps / accelerationMps2 }
  addChange(out, car, { ...braking, times, isOnRoad: false })
  addChange(out, car, { ...starting, times, isOnRoad: false })
}
