import { storedJ } from './battery.ts'
import { daySun, forecastDay } from './forecast.ts'
import type { DayForecast, Opening, Race } from './forecast.ts'

/** The fastest speed that meets the day's target, or the best try and why none does. */
export interface SpeedSearch {
  /** The speed found, or the one that came closest. [km/h] */
  speedKmh: number
  forecast: DayForecast
  meetsTarget: boolean
  tried: number
}

/**
 * The fastest constant whole km/h with which a day ends at its target, never touches the reserve,
 * and reaches no stop too late.
 *
 * Speeds are tried from the highest down, each with the full forecast, so the first that holds is the
 * fastest. The closing balance need not fall with speed (a late arrival loses the evening's sun), which
 * is why nothing is skipped. Speeds above every limit on the road are one and the same and tried once.
 *
 * @param targetCharge  charge wanted when the day closes; the reserve where none is wanted, 0..1
 * @param range         lowest and highest speed to try. [km/h]
 */
export function fastestThatMeets(
  race: Race,
  dayIndex: number,
  opening: Opening,
  targetCharge: number,
  range: { lowestKmh: number; highestKmh: number },
): SpeedSearch {
  const path = daySun(race.days[dayIndex])
  const wantedMps = new Float64Array(race.course.pieces.count)
  const reserveJ = storedJ(race.car.pack, race.car.reserveCharge)
  const targetJ = storedJ(race.car.pack, targetCharge)
  const highest = Math.floor(Math.max(range.highestKmh, range.lowestKmh))
  const lowest = Math.ceil(range.lowestKmh)
  let best: SpeedSearch | null = null
  let bestShortJ = Number.POSITIVE_INFINITY
  for (let speedKmh = Math.min(highest, topKmh(race, highest)), tried = 1; ; speedKmh--, tried++) {
    wantedMps.fill(speedKmh / 3.6)
    const forecast = forecastDay(race, dayIndex, opening, wantedMps, path)
    const shortJ = shortOfTargetJ(forecast, targetJ, reserveJ)
    const inTime = forecast.timetable.late.length === 0
    if (shortJ <= 0 && inTime) return { speedKmh, forecast, meetsTarget: true, tried }
    if (best === null || shortJ < bestShortJ) {
      best = { speedKmh, forecast, meetsTarget: false, tried }
      bestShortJ = shortJ
    }
    if (speedKmh <= lowest) return { ...best, tried }
  }
}

/** The highest limit on the road, rounded up: above it nothing changes. [km/h] */
function topKmh(race: Race, highest: number): number {
  const mostMps = race.course.pieces.limitMps.reduce((most, limit) => Math.max(most, limit), 0)
  return Number.isFinite(mostMps) ? Math.max(Math.ceil(mostMps * 3.6 - 1e-9), 1) : highest
}

/** What is missing at the worst place: to the reserve on the way, to the target at the close, or what the pack could not give. */
function shortOfTargetJ(forecast: DayForecast, targetJ: number, reserveJ: number): number {
  const { lowestStep, openingJ, closingJ } = forecast
  const lowestJ = lowestStep < 0 ? openingJ : forecast.balance.storedJ[lowestStep]
  const underReserveJ = Math.min(openingJ, reserveJ) - lowestJ
  const missingJ = forecast.balance.spans.reduce((sum, span) => sum + span.short, 0)
  return Math.max(targetJ - closingJ, underReserveJ, missingJ > 0 ? missingJ + reserveJ : Number.NEGATIVE_INFINITY)
}
