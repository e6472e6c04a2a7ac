import type { Course } from './course.ts'
import { attainableSpeedMps } from './drive.ts'
import type { Drive } from './drive.ts'
import { InputError } from './input-error.ts'
import { holdingN } from './road.ts'
import type { Going, RoadLoad } from './road.ts'

/** Bounds that the driver keeps to when the speed changes; the motor may allow less. */
export interface MotionBounds {
  accelerationMps2: number
  brakingMps2: number
}

/** A course with what bears on the car's motion; every array has one entry per piece. */
export interface DrivenRoad {
  course: Course
  load: RoadLoad
  drive: Drive
  bounds: MotionBounds
  /** Speed wanted, under the limits. */
  capMps: Float64Array
  /** Speed that the motor can hold, at most capMps; 0 where it can hold none. */
  heldMps: Float64Array
  /** Air met on the piece, and rolling there over rolling at the load's reference. */
  headwindMps: Float64Array
  crosswindMps: Float64Array
  densityKgM3: Float64Array
  surfaceFactor: Float64Array
}

/** Below this a car does not count as able to climb. [Mps] */
export const CRAWL_MPS = 1

/** Air before the weather is known. [KgM3] */
const SOME_DENSITY_KGM3 = 1.2

/** @throws InputError naming the bound that is missing or out of range */
export function prepareBounds(bounds: MotionBounds): MotionBounds {
  for (const name of ['accelerationMps2', 'brakingMps2'] as const)
    if (!(bounds[name] >= 0.01 && bounds[name] <= 20))
      throw new InputError('out-of-range', `bounds.${name}`, `${bounds[name]} given, 0.01 to 20 expected`)
  return { ...bounds }
}

/**
 * A course to be driven, in calm air until its weather is known.
 *
 * @param wantedMps  speed wanted on each piece; limits and the motor's top speed may lower it. [Mps] (pieces)
 */
export function drivenRoad(
  car: { load: RoadLoad; drive: Drive; bounds: MotionBounds },
  course: Course,
  wantedMps: Float64Array,
): DrivenRoad {
  const { count, surfaceFactor, limitMps } = course.pieces
  const topMps = car.drive.topMps ?? Infinity
  const road = {
    course,
    load: car.load,
    drive: car.drive,
    bounds: car.bounds,
    capMps: wantedMps.map((wanted, i) => Math.min(wanted, limitMps[i], topMps)),
    heldMps: new Float64Array(count),
    headwindMps: new Float64Array(count),
    crosswindMps: new Float64Array(count),
    densityKgM3: new Float64Array(count).fill(SOME_DENSITY_KGM3),
    surfaceFactor: surfaceFactor.slice(),
  }
  for (let i = 0; i < count; i++) holdWhatTheMotorCan(road, i)
  return road
}

// Scratch; a road is never asked from within.
const going: Going = { gradeRad: 0, surfaceFactor: 1, headwindMps: 0, crosswindMps: 0, densityKgM3: 1.2 }

function goingOn(road: DrivenRoad, piece: number): Going {
  going.gradeRad = road.course.pieces.gradeRad[piece]
  going.surfaceFactor = road.surfaceFactor[piece]
  going.headwindMps = road.headwindMps[piece]
  going.crosswindMps = road.crosswindMps[piece]
  going.densityKgM3 = road.densityKgM3[piece]
  return going
}

/** Sets a piece's held speed from its air. @returns by how much it changed [Mps] */
export function holdWhatTheMotorCan(road: DrivenRoad, piece: number): number {
  const before = road.heldMps[piece]
  const heldMps = attainableSpeedMps(road.load, road.drive, goingOn(road, piece), road.capMps[piece])
  road.heldMps[piece] = heldMps
  return Math.abs(heldMps - before)
}

/**
 * Acceleration that the whole pull of the motor gives, negative where the road takes more.
 *
 * @param speedMps at least 0. [m/s]
 * @returns [m/s²]
 */
export function pullMps2(road: DrivenRoad, piece: number, speedMps: number): number {
  const { load, drive } = road
  const mostN = Math.min(drive.motorMaxN, drive.motorMaxW / speedMps)
  return (mostN - holdingN(load, speedMps, goingOn(road, piece))) / (load.massKg * load.rotatingFactor)
}
