import { forecastDay, type Opening, type Race } from '../forecast.ts'
import { standingBefore } from '../until-there.ts'
import { furthestDay } from './furthest.ts'
import { ordinarySpeeds } from './ordinary.ts'
import { type DayPlan, type DayTask, planDay } from './plan-day.ts'
import { raceCharges, type RaceTask } from './race-charges.ts'

/** One day of a planned race. */
export interface RaceDay {
  /** Null where the car is parked all day, or where nothing can be planned any more. */
  plan: DayPlan | null
  isParked: boolean
  /** The race as it was planned: its road ends where the day's hours let the car come. */
  race: Race
  /** How the next day opens; null where the day cannot be planned. */
  closing: Opening | null
}

/**
 * Plans of all days in turn, each from where the one before closes. A day whose stages the hours do not let finish
 * ends where they let the car come, and the next one goes on from there.
 *
 * @param tell  is told of each day when it is planned
 */
export function planRace(
  task: RaceTask,
  tell: (day: RaceDay) => void = () => {},
): { targets: number[]; days: RaceDay[] } {
  const { race, dayIndex } = task
  const { targetCharge: targets, speedMps } = raceCharges(task)
  const days: RaceDay[] = []
  let opening: Opening | null = task.opening
  for (let d = dayIndex; d < race.days.length; d++) {
    const startMps = speedMps[d] ?? undefined
    const day: RaceDay =
      opening === null
        ? { plan: null, isParked: false, race, closing: null }
        : planNext({ race, dayIndex: d, opening, targetCharge: targets[d], startMps })
    days.push(day)
    tell(day)
    opening = day.closing
  }
  return { targets, days }
}

function planNext(task: DayTask): RaceDay {
  const { race, dayIndex, opening } = task
  if (opening.standing.stage > race.days[dayIndex].lastStage) {
    return {
      plan: null,
      isParked: true,
      race,
      closing: forecastDay(race, dayIndex, opening, ordinarySpeeds(race)).closing,
    }
  }
  const plan = planDay(task)
  if (plan?.best.verdict.isFinished === true)
    return { plan, isParked: false, race, closing: plan.best.forecast.closing }
  const furthest = furthestDay(task, () => 'Camp')
  if (furthest === null) return { plan: null, isParked: false, race, closing: null }
  const standing = standingBefore(race, furthest.endPiece)
  const closing = { ...furthest.plan.best.forecast.closing, standing }
  return { plan: furthest.plan, isParked: false, race: furthest.race, closing }
}
