import { storedJ } from './battery.ts'
import { daySun, forecastDay } from './forecast.ts'
import type { DayForecast, Opening, Race } from './forecast.ts'

/** The fastest speed that meets the day's target, or the one that came closest. */
export interface SpeedSearch {
  /** The speed found; where none meets the target, of those in time the least short, else the least late. [km/h] */
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
  let best: Try | null = null
  for (let speedKmh = Math.min(highest, topKmh(race, highest)), tried = 1; ; speedKmh--, tried++) {
    wantedMps.fill(speedKmh / 3.6)
    const forecast = forecastDay(race, dayIndex, opening, wantedMps, path)
    const shortJ = shortOfTargetJ(forecast, targetJ, reserveJ)
    const lateS = forecast.timetable.late.reduce((sum, { byS }) => sum + byS, 0)
    if (shortJ <= 0 && lateS === 0) return { speedKmh, forecast, meetsTarget: true, tried }
    const now = { speedKmh, forecast, shortJ, lateS }
    if (best === null || isCloser(now, best)) best = now
    if (speedKmh <= lowest) return { speedKmh: best.speedKmh, forecast: best.forecast, meetsTarget: false, tried }
  }
}

interface Try {
  speedKmh: number
  forecast: DayForecast
  shortJ: number
  lateS: number
}

const isCloser = (one: Try, other: Try): boolean =>
  one.lateS === other.lateS ? one.shortJ < other.shortJ : one.lateS < other.lateS

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
