import { type DayForecast, forecastDay, type Opening, type Race } from '../forecast.ts'
import { holds } from './judge.ts'
import { ordinarySpeeds } from './ordinary.ts'
import { bestDay } from './plan-day.ts'
import type { RaceDay } from './plan-race.ts'
import { raceCharges, type RaceTask } from './race-charges.ts'

/** What a given closing charge costs against the one that the days around it would choose. */
export interface NightCost {
  /** How much longer the days take together with the given charge. [S] */
  costS: number
  /** The charge that they would choose, 0..1. */
  freeCharge: number
}

/** From setting off to the arrival, stops included; 0 where nothing is driven. [S] */
export function onTheRoadS({ timetable: { spans } }: DayForecast): number {
  const first = spans.find(({ kind }) => kind === 'drive')
  const last = spans.findLast(({ kind }) => kind === 'drive')
  return first === undefined || last === undefined ? 0 : (last.toMs - first.fromMs) / 1000
}

/**
 * What one given closing charge of a planned race costs.
 *
 * The days between the given charges before and after it are planned once more with that one free; everything else
 * stays. Each cost is of one charge alone: costs of several do not add up.
 *
 * @param days   the race as it was planned, from the task's first day on
 * @param night  day of the race whose closing charge is given
 * @returns null where a day around it does not hold, or ends before its road does: then there is no time to compare
 */
export function nightCost(task: RaceTask, days: RaceDay[], night: number): NightCost | null {
  const { race, dayIndex, targetCharge } = task
  const isGiven = (d: number): boolean => !Number.isNaN(targetCharge[d] ?? Number.NaN)
  const dates = race.days.map((_, d) => d)
  const from = (dates.findLast((d) => d >= dayIndex && d < night && isGiven(d)) ?? dayIndex - 1) + 1
  const to = dates.find((d) => d > night && isGiven(d)) ?? race.days.length - 1
  const around = days.slice(from - dayIndex, to - dayIndex + 1)
  const opening = from === dayIndex ? task.opening : days[from - dayIndex - 1].closing
  if (opening === null || !around.every((day) => isComparable(day, race))) return null
  const freed = targetCharge.map((charge, d) => (d === night ? Number.NaN : charge))
  const part = { race: { ...race, days: race.days.slice(0, to + 1) }, dayIndex: from, opening, targetCharge: freed }
  const { targetCharge: charges } = raceCharges(part)
  const freeS = drivenS(part, charges, around)
  if (freeS === null) return null
  const givenS = around.reduce((sum, { plan }) => sum + (plan === null ? 0 : onTheRoadS(plan.best.forecast)), 0)
  return { costS: Math.max(givenS - freeS, 0), freeCharge: charges[night] }
}

const isComparable = (day: RaceDay, race: Race): boolean =>
  day.isParked || (day.plan !== null && day.race === race && holds(day.plan.best.verdict))

/** Time on the road of the best drives to these closing charges; null where a day has none that holds. [S] */
function drivenS({ race, dayIndex, opening }: RaceTask, charges: number[], before: RaceDay[]): number | null {
  let open: Opening = opening
  let totalS = 0
  for (const [i, { plan }] of before.entries()) {
    const d = dayIndex + i
    const startMps = plan?.best.speedMps ?? ordinarySpeeds(race)
    if (plan === null) {
      open = forecastDay(race, d, open, startMps).closing
      continue
    }
    const best = bestDay({ race, dayIndex: d, opening: open, targetCharge: charges[d], startMps })?.found.best
    if (best === undefined || !holds(best.verdict) || !best.verdict.isFinished) return null
    totalS += onTheRoadS(best.forecast)
    open = best.forecast.closing
  }
  return totalS
}
