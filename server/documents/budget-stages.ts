import { ledger } from '../engine/ledger.ts'
import type { DayBudget } from './budget.ts'
import { balanceAt, dayKm, isLeft, lastStepOf } from './budget-day.ts'
import type { ForecastDay } from './budget-day.ts'
import { ledgerDocument } from './budget-ledger.ts'
import { spanZones } from './day-zones.ts'
import { localIso } from './local-time.ts'

const J_PER_WH = 3600

/** The budget of each leg driven on a day, from its departure to the end of the stop at its finish. */
export function stageBudgets(day: ForecastDay): DayBudget['stages'] {
  const { spans } = day.forecast.timetable
  const driven = spans.filter((s) => s.kind === 'drive').map((s) => s.stage)
  return driven.map((stage) => stageBudget(day, stage))
}

function stageBudget(day: ForecastDay, stage: number): DayBudget['stages'][number] {
  const { forecast, race } = day
  const { spans } = forecast.timetable
  const first = spans.findIndex((s) => s.kind === 'drive' && s.stage === stage)
  const leg = spans[first]
  const stop = spans[first + 1]?.kind === 'stop' ? spans[first + 1] : undefined
  const covered = stop === undefined ? [first] : [first, first + 1]
  const opening = balanceAt(day, lastStepOf(day, first - 1))
  const closing = balanceAt(day, lastStepOf(day, covered[covered.length - 1]))
  const ends = { openingJ: opening.wh * J_PER_WH, closingJ: closing.wh * J_PER_WH }
  const sums = ledger(spans, forecast.balance.spans, covered, ends)
  const zones = spanZones(day)
  const drivenKm = (leg.toM - leg.fromM) / 1000
  return {
    id: day.stages[stage].stage.id,
    name: race.stages[stage].name,
    start: race.stages[stage].start,
    finish: race.stages[stage].finish,
    fromKm: dayKm(day, leg.fromM),
    toKm: dayKm(day, leg.toM),
    drivenKm,
    isFinished: leg.toM >= race.course.stages[stage].toM - 1e-6,
    departAt: localIso(leg.fromMs, zones[first].start),
    arriveAt: localIso(leg.toMs, zones[first].end),
    departsNextAt: stop !== undefined && isLeft(day, first + 1) ? localIso(stop.toMs, zones[first + 1].end) : null,
    meanKmh: drivenKm / ((leg.toMs - leg.fromMs) / 3_600_000),
    opening,
    arrival: balanceAt(day, lastStepOf(day, first)),
    closing,
    ledger: ledgerDocument(sums, race.stages, day.stages),
  }
}
