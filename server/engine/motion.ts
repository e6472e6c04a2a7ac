import type { Course } from './course.ts'
import { attainableSpeedMps } from './drive.ts'
import type { Drive } from './drive.ts'
import { BRAKING_MPS2, STARTING_MPS2 } from './road-energy.ts'
import { tyreFactor } from './road.ts'
import type { Going, RoadLoad } from './road.ts'
import type { Weather } from './sky.ts'
import type { Steps } from './steps.ts'
import { crosswindMps, headwindMps, windShareAtCar } from './wind.ts'

/** The air at the car, one entry per step; headwind against the car is positive. */
export interface Air {
  headwindMps: Float64Array
  crosswindMps: Float64Array
  /** Speed of the air over the panels. */
  overPanelsMps: Float64Array
  densityKgM3: Float64Array
  airC: Float64Array
}

/** Below this a car does not count as able to climb. [Mps] */
export const CRAWL_MPS = 1

/**
 * Wind, airflow and density at the car's height along the steps.
 *
 * @param windHeightM  height at which the car feels the wind. [M]
 * @source logarithmic wind profile between 10 m and the car, roughness of the course
 */
export function airAtCar(
  course: Course,
  steps: Steps,
  weather: Pick<Weather, 'windMps' | 'windFromRad' | 'densityKgM3' | 'airC'>,
  windHeightM: number,
): Air {
  const n = steps.count
  const air = {
    headwindMps: new Float64Array(n),
    crosswindMps: new Float64Array(n),
    overPanelsMps: new Float64Array(n),
    densityKgM3: weather.densityKgM3,
    airC: weather.airC,
  }
  let roughnessM = Number.NaN
  let share = 0
  for (let i = 0; i < n; i++) {
    const here = course.roughnessM[steps.piece[i]]
    if (here !== roughnessM) {
      roughnessM = here
      share = windShareAtCar(here, windHeightM)
    }
    const windMps = weather.windMps[i] * share
    const against = headwindMps(windMps, weather.windFromRad[i], steps.headingRad[i])
    const across = crosswindMps(windMps, weather.windFromRad[i], steps.headingRad[i])
    air.headwindMps[i] = against
    air.crosswindMps[i] = across
    const along = steps.speedMps[i] + against
    air.overPanelsMps[i] = Math.sqrt(along * along + across * across)
  }
  return air
}

/**
 * Time that each piece takes at a held speed; expected halts add braking and starting. Infinity at or below a crawl.
 *
 * @param speedMps  held speed per piece. [Mps] (pieces)
 */
export function pieceTimesS(course: Course, speedMps: Float64Array): Float64Array {
  const { count, lengthM, haltsPerM } = course.pieces
  const timesS = new Float64Array(count)
  for (let i = 0; i < count; i++) {
    const v = speedMps[i]
    const haltS = (v / 2) * (1 / BRAKING_MPS2 + 1 / STARTING_MPS2)
    timesS[i] = v < CRAWL_MPS ? Number.POSITIVE_INFINITY : lengthM[i] / v + haltsPerM[i] * lengthM[i] * haltS
  }
  return timesS
}

/**
 * Lowers the speeds of pieces on which the motor cannot hold them in the weather met there.
 *
 * @param speedMps  is lowered in place. [Mps] (pieces)
 * @returns whether any speed changed by more than 0.01 m/s
 */
export function limitByMotor(
  car: { load: RoadLoad; drive: Drive },
  day: { course: Course; steps: Steps; air: Air },
  speedMps: Float64Array,
): boolean {
  const { steps, air, course } = day
  const going: Going = { gradeRad: 0, surfaceFactor: 1, headwindMps: 0, crosswindMps: 0, densityKgM3: 1.2 }
  let hasChanged = false
  for (let i = 0; i < steps.count; i++) {
    if (steps.speedMps[i] === 0) continue
    const piece = steps.piece[i]
    going.gradeRad = steps.gradeRad[i]
    going.surfaceFactor = course.pieces.surfaceFactor[piece] * tyreFactor(car.load, air.airC[i])
    going.headwindMps = air.headwindMps[i]
    going.crosswindMps = air.crosswindMps[i]
    going.densityKgM3 = air.densityKgM3[i]
    const heldMps = attainableSpeedMps(car.load, car.drive, going, speedMps[piece])
    if (heldMps < speedMps[piece] - 0.01) hasChanged = true
    speedMps[piece] = heldMps
  }
  return hasChanged
}
