import { arrayHarvest } from '../array.ts'
import type { Race } from '../forecast.ts'
import type { Horizon } from '../horizon.ts'
import { airAtCar } from '../motion.ts'
import { weatherAlong } from '../sky.ts'
import type { SunPath } from '../sun.ts'
import type { Steps } from '../steps.ts'
import { takers } from '../takers.ts'

/**
 * What trackers and strings bring to the bus at any places and times, less what idle trackers draw.
 *
 * Cells as warm as they would become there: what they remember of the minutes before is left to the forecast.
 *
 * @param steps    places, times, headings, speeds; `lifted` where the array is up
 * @param packV    voltage at the pack's terminals at each step. [V] (steps)
 * @param horizon  what stands around the car at all of them, if anything
 * @returns [W] (steps)
 */
export function sunOnBusW(
  { car, course, sky }: Race,
  path: SunPath,
  steps: Steps,
  packV: Float64Array,
  horizon?: Horizon,
): Float64Array {
  const weather = weatherAlong(sky, path, steps)
  const air = airAtCar(course, steps, weather, car.windHeightM)
  const harvest = arrayHarvest(car.array, {
    weather,
    headingRad: steps.headingRad,
    gradeRad: steps.gradeRad,
    airSpeedMps: air.overPanelsMps,
    lifted: steps.lifted,
    overPanelsC: weather.airC.map((airC, i) => airC + course.roadHeatC[steps.piece[i]] * (weather.ghiWm2[i] / 1000)),
    ...(horizon === undefined ? {} : { horizons: { of: [horizon], at: new Int32Array(steps.count) } }),
  })
  const taken = takers(car, { course, spans: [], steps, weather, air, harvest })
  return packV.map((volts, i) => {
    taken.take(i, volts)
    return taken.outputW() - taken.standbyW()
  })
}
