import { ledger } from '../engine/ledger.ts'
import type { DayBudget } from './budget.ts'
import { balanceAt, dayKm, stepBefore } from './budget-day.ts'
import type { ForecastDay } from './budget-day.ts'
import { ledgerDocument } from './budget-ledger.ts'
import { localIso } from './local-time.ts'

const J_PER_WH = 3600

/** The budget of each leg driven on a day, from its departure to the end of the stop at its finish. */
export function stageBudgets(day: ForecastDay): DayBudget['stages'] {
  const { spans } = day.forecast.timetable
  const driven = [...new Set(spans.filter((s) => s.kind === 'drive').map((s) => s.stage))]
  return driven.map((stage) => stageBudget(day, stage))
}

function stageBudget(day: ForecastDay, stage: number): DayBudget['stages'][number] {
  const { forecast, race, zone } = day
  const { spans } = forecast.timetable
  const chosen = spans.flatMap((s, i) => (s.stage === stage ? [i] : []))
  const legs = chosen.map((i) => spans[i]).filter((s) => s.kind === 'drive')
  const leg = legs[0]
  const stop = chosen.map((i) => spans[i]).find((s) => s.kind === 'stop' && s.fromMs >= leg.toMs)
  const endMs = stop?.toMs ?? leg.toMs
  const at = (atMs: number) => balanceAt(day, stepBefore(forecast.steps.toMs, forecast.steps.count, atMs))
  const opening = at(leg.fromMs)
  const closing = at(endMs)
  const covered = chosen.filter((i) => spans[i].fromMs >= leg.fromMs)
  const ends = { openingJ: opening.wh * J_PER_WH, closingJ: closing.wh * J_PER_WH }
  const sums = ledger(spans, forecast.balance.spans, covered, ends)
  const drivenKm = (leg.toM - leg.fromM) / 1000
  const isFinished = leg.toM >= race.course.stages[stage].toM - 1e-6
  const isStopServed = forecast.timetable.evening.stopLeftS === 0
  return {
    id: day.stages[stage].stage.id,
    name: race.stages[stage].name,
    start: race.stages[stage].start,
    finish: race.stages[stage].finish,
    fromKm: dayKm(day, leg.fromM),
    toKm: dayKm(day, leg.toM),
    drivenKm,
    isFinished,
    departAt: localIso(leg.fromMs, zone),
    arriveAt: localIso(leg.toMs, zone),
    departsNextAt:
      stop !== undefined && (isStopServed || stop.toMs < race.days[day.dayIndex].drivingToMs)
        ? localIso(stop.toMs, zone)
        : null,
    meanKmh: drivenKm / ((leg.toMs - leg.fromMs) / 3_600_000),
    opening,
    arrival: at(leg.toMs),
    closing,
    ledger: ledgerDocument(sums, race.stages, day.stages),
  }
}
