import type { Course } from './course.ts'
import { holdWhatTheMotorCan } from './driven-road.ts'
import type { DrivenRoad } from './driven-road.ts'
import { tyreFactor } from './road.ts'
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

/**
 * Wind, airflow and density at the car's height along the steps.
 *
 * @param windHeightM  height at which the car feels the wind. [M]
 * @source logarithmic wind profile between 10 m and the car, roughness of the course
 */
export function airAtCar(
  course: Course,
  steps: Steps,
  weather: Pick<Weather, 'windMps' | 'windFromRad' | 'densityKgM3' | 'airC' | 'addedHeadwindMps'>,
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
    const added = steps.speedMps[i] > 0 ? (weather.addedHeadwindMps?.[i] ?? 0) : 0
    const against = headwindMps(windMps, weather.windFromRad[i], steps.headingRad[i]) + added
    const across = crosswindMps(windMps, weather.windFromRad[i], steps.headingRad[i])
    air.headwindMps[i] = against
    air.crosswindMps[i] = across
    const along = steps.speedMps[i] + against
    air.overPanelsMps[i] = Math.sqrt(along * along + across * across)
  }
  return air
}

/** A held speed that changed by less than this stays as it was laid out. [Mps] */
const SAME_SPEED_MPS = 0.01

/**
 * Brings the weather met on each piece to the road, and with it the speeds that the motor can hold.
 *
 * @param road  air, rolling and held speeds are changed in place, where it is driven
 * @returns whether any held speed changed so that the day must be laid out anew
 */
export function meetWeather(road: DrivenRoad, steps: Steps, air: Air): boolean {
  let hasChanged = false
  for (let i = 0; i < steps.count; i++) {
    const piece = steps.piece[i]
    if (steps.speedMps[i] === 0 || (i > 0 && piece === steps.piece[i - 1] && steps.speedMps[i - 1] > 0)) continue
    road.headwindMps[piece] = air.headwindMps[i]
    road.crosswindMps[piece] = air.crosswindMps[i]
    road.densityKgM3[piece] = air.densityKgM3[i]
    road.surfaceFactor[piece] = road.course.pieces.surfaceFactor[piece] * tyreFactor(road.load, air.airC[i])
    if (holdWhatTheMotorCan(road, piece) > SAME_SPEED_MPS) hasChanged = true
  }
  return hasChanged
}
