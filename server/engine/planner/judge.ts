import { storedJ } from '../battery.ts'
import type { DayForecast, Race } from '../forecast.ts'

/** How a forecast does against what is wanted of its day. */
export interface Verdict {
  /** What the worst place or the close lacks; 0 or less where reserve and target are kept. [J] */
  lackJ: number
  /** Lateness at stops together. [S] */
  lateS: number
  /** Whether the last stage of the day is finished. */
  isFinished: boolean
  /** End of the last drive. [ms] */
  arrivalMs: number
  /** Where the last drive ends, from the start of the race. [M] */
  reachedM: number
}

/**
 * Judges a day: reserve at every step, target at the close, stops in time, all by the forecast alone.
 *
 * @param targetCharge  usable charge wanted when the day closes, 0..1
 */
export function judge({ car }: Pick<Race, 'car'>, forecast: DayForecast, targetCharge: number): Verdict {
  const { pack, reserveCharge } = car
  const { lowestStep, openingJ, closingJ, balance, timetable } = forecast
  const lowestJ = lowestStep < 0 ? openingJ : balance.storedJ[lowestStep]
  const underReserveJ = Math.min(openingJ, storedJ(pack, reserveCharge)) - lowestJ
  const missingJ = balance.spans.reduce((sum, span) => sum + span.short, 0)
  const lackJ = Math.max(storedJ(pack, targetCharge) - closingJ, underReserveJ)
  const lastDrive = timetable.spans.findLast((span) => span.kind === 'drive')
  return {
    lackJ: missingJ > 0 ? Math.max(lackJ, missingJ) : lackJ,
    lateS: timetable.late.reduce((sum, { byS }) => sum + byS, 0),
    isFinished: !timetable.isRoadLeft,
    arrivalMs: lastDrive?.toMs ?? Number.NaN,
    reachedM: timetable.evening.placeM,
  }
}

/** A lack of less is rounding. [J] */
const ROUNDING_J = 1e-3

/** Whether reserve, target and stops are kept. */
export const holds = (verdict: Verdict): boolean => verdict.lackJ <= ROUNDING_J && verdict.lateS <= 0

/** A verdict that holds before one that does not; then the farther, then the earlier; else the one that lacks less. */
export function isBetterVerdict(one: Verdict, other: Verdict): boolean {
  if (holds(one) !== holds(other)) return holds(one)
  if (!holds(one)) return one.lateS === other.lateS ? one.lackJ < other.lackJ : one.lateS < other.lateS
  if (Math.abs(one.reachedM - other.reachedM) > 1) return one.reachedM > other.reachedM
  return one.arrivalMs < other.arrivalMs
}
