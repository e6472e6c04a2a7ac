import type { DayRules } from '../engine/day-rules.ts'
import type { Race } from '../engine/forecast.ts'
import { InputError } from '../engine/input-error.ts'
import type { Furthest } from '../engine/planner/furthest.ts'
import { dayKm } from './budget-day.ts'
import type { DrivenDay } from './forecast.ts'
import { clock, instantMs } from './local-time.ts'
import type { PlanDocument } from './plan.ts'

/** Distance of a piece's start from where the day starts. [km] */
export function edgeKm(day: DrivenDay, piece: number): number {
  const { pieces, lengthM } = day.race.course
  return Math.max(dayKm(day, piece < pieces.count ? pieces.fromM[piece] : lengthM), 0)
}

/**
 * The race with the driving of a day ended by a clock time.
 *
 * @param byTime  local time of the day; left out, the race as it is
 * @throws InputError when it is outside the driving hours
 */
export function endedBy({ race, dayIndex, date, zone }: DrivenDay, byTime?: string): Race {
  if (byTime === undefined) return race
  const { drivingFromMs, drivingToMs } = race.days[dayIndex]
  const atMs = instantMs(date, byTime, zone, 'byTime')
  if (atMs <= drivingFromMs || atMs > drivingToMs)
    throw new InputError(
      'out-of-range',
      'byTime',
      `${byTime} given; expected after ${clock(drivingFromMs, zone)} and not after ${clock(drivingToMs, zone)}, the driving hours`,
    )
  const ended = (day: DayRules, d: number): DayRules => (d === dayIndex ? { ...day, drivingToMs: atMs } : day)
  return { ...race, days: race.days.map(ended) }
}

/** What the place in front of a piece is called: a finish by its name. */
export function campName(day: DrivenDay, piece: number): string {
  const at = day.race.course.stages.findIndex(({ endPiece }) => endPiece === piece)
  return at >= 0 ? day.race.stages[at].finish : `Camp at km ${edgeKm(day, piece).toFixed(0)}`
}

/** Where a day ends that does not finish its road, and the sentence for it. */
export function campOf(
  day: DrivenDay,
  { endPiece }: Pick<Furthest, 'endPiece'>,
): {
  camp: NonNullable<PlanDocument['camp']>
  outcome: PlanDocument['outcome']
} {
  const { course, stages, days } = day.race
  const s = course.stages.findIndex((stage) => endPiece <= stage.endPiece)
  const { fromM, endPiece: stageEnd, toM } = course.stages[s]
  const placeM = endPiece === stageEnd ? toM : course.pieces.fromM[endPiece]
  const last = days[day.dayIndex].lastStage
  const leftKm = (course.stages[last].toM - placeM) / 1000
  const km = dayKm(day, placeM)
  const place = endPiece === stageEnd ? stages[s].finish : `km ${km.toFixed(0)}`
  const until = { stage: day.stages[s].stage.id, km: Math.round((placeM - fromM) * 1000) / 1e6 }
  return {
    camp: { until, km, leftKm, goesOn: day.dayIndex < days.length - 1 },
    outcome: {
      kind: 'furthest',
      text: `The day ends at ${place}, ${leftKm.toFixed(0)} km before ${stages[last].finish}.`,
    },
  }
}
