import type { Race, DayForecast } from '../engine/forecast.ts'
import { storedJ } from '../engine/battery.ts'
import { ledger } from '../engine/ledger.ts'
import type { Ledger } from '../engine/ledger.ts'
import { channelsOf } from '../engine/tracker.ts'
import type { DayBudget } from './budget.ts'
import { ledgerDocument } from './budget-ledger.ts'
import { outcomeOf } from './budget-outcome.ts'
import { seriesDocument } from './budget-series.ts'
import { packOf } from './budget-pack.ts'
import { spanZones, stepZone } from './day-zones.ts'
import { localIso, offsetMin } from './local-time.ts'
import type { PlacedStage } from './race-model.ts'
import type { Penalties } from './race.ts'
import { stageBudgets } from './budget-stages.ts'

const WH = 1 / 3600

/** One day of a race with its forecast, as the documents describe it. */
export interface ForecastDay {
  race: Race
  stages: PlacedStage[]
  dayIndex: number
  date: string
  zone: string
  forecast: DayForecast
  heldKmh: number | null
  search: { tried: number; meetsTarget: boolean } | null
  /** Charge wanted at the close, null where none is. */
  targetCharge: number | null
  penalties: Penalties
}

/** Stored energy and charge at the end of a step; -1 is the opening. */
export function balanceAt(day: ForecastDay, step: number) {
  const { forecast } = day
  const charge = step < 0 ? forecast.openingCharge : forecast.balance.charge[step]
  return atCharge(day.race, charge, step < 0 ? forecast.openingJ : forecast.balance.storedJ[step])
}

/** A balance: usable energy, the charge by coulombs, and the energy's share of a full pack beside it. */
function atCharge({ car }: Race, charge: number, heldJ = storedJ(car.pack, charge)) {
  return { wh: heldJ * WH, chargePct: charge * 100, energyPct: (heldJ / storedJ(car.pack, 1)) * 100 }
}

/** Distance of a place from where the day starts. [km] */
export const dayKm = (day: ForecastDay, placeM: number): number =>
  (placeM - (day.forecast.timetable.spans[0]?.fromM ?? placeM)) / 1000

/** Name of a place: a stage's start or finish when the car stands on one, else its distance. */
export function placeName(day: ForecastDay, placeM: number): string {
  const { course, stages } = day.race
  const here = (m: number) => Math.abs(m - placeM) < 1
  const at = course.stages.findIndex((s) => here(s.toM))
  if (at >= 0) return stages[at].finish
  const from = course.stages.findIndex((s) => here(s.fromM))
  return from >= 0 ? stages[from].start : `km ${dayKm(day, placeM).toFixed(0)}`
}

/** A day's forecast as the budget that people read. */
export function dayBudget(day: ForecastDay): DayBudget {
  const { forecast, race, zone } = day
  const { spans } = forecast.timetable
  const closing = atCharge(race, forecast.closing.charge, forecast.closingJ)
  const reserve = atCharge(race, race.car.reserveCharge)
  const target = day.targetCharge === null ? null : atCharge(race, day.targetCharge)
  const lowest = lowestOf(day)
  return {
    date: day.date,
    zone,
    utcOffsetMin: offsetMin(race.days[day.dayIndex].opensMs, zone),
    outcome: outcomeOf(day, { closing, lowest, reserve, target }),
    heldKmh: day.heldKmh,
    speedsTried: day.search?.tried ?? 0,
    drivenKm: spans.reduce((sum, s) => sum + s.toM - s.fromM, 0) / 1000,
    opening: balanceAt(day, -1),
    closing,
    reserve,
    capacityWh: storedJ(race.car.pack, 1) * WH,
    lowest,
    marginWh: lowest.wh - reserve.wh,
    target,
    targetMarginWh: target === null ? null : closing.wh - target.wh,
    ledger: ledgerDocument(wholeDay(forecast), race.stages, day.stages),
    stages: stageBudgets(day),
    gates: gatesOf(day),
    spans: spansOf(day),
    trackers: trackersOf(day),
    pack: packOf(day.forecast),
    penaltyMin: penaltyMin(day),
    series: seriesDocument(day),
  }
}

function wholeDay({ timetable, balance, openingJ, closingJ }: DayForecast): Ledger {
  const { spans } = timetable
  return ledger(spans, balance.spans, [...spans.keys()], { openingJ, closingJ })
}

function spansOf(day: ForecastDay): DayBudget['spans'] {
  const zones = spanZones(day)
  return day.forecast.timetable.spans.map((s, i) => ({
    kind: s.kind,
    name: s.kind === 'drive' ? day.race.stages[s.stage].name : placeName(day, s.fromM),
    from: localIso(s.fromMs, zones[i].start),
    to: localIso(s.toMs, zones[i].end),
    fromKm: dayKm(day, s.fromM),
    toKm: dayKm(day, s.toM),
  }))
}

function lowestOf(day: ForecastDay): DayBudget['lowest'] {
  const { forecast, race } = day
  const step = forecast.lowestStep
  const atMs = step < 0 ? race.days[day.dayIndex].opensMs : forecast.steps.toMs[step]
  const placeM = step < 0 ? forecast.steps.fromM[0] : forecast.steps.toM[step]
  const at = localIso(atMs, stepZone(day, step))
  return { ...balanceAt(day, step), at, km: dayKm(day, placeM), place: placeName(day, placeM) }
}

/** The places and times at which a crew compares its battery with the budget. */
function gatesOf(day: ForecastDay): DayBudget['gates'] {
  const { spans } = day.forecast.timetable
  const gates = [gate(day, 'dawn', 0, 'start')]
  const firstDrive = spans.findIndex((s) => s.kind === 'drive')
  const lastDrive = spans.findLastIndex((s) => s.kind === 'drive')
  spans.forEach((span, i) => {
    if (i === firstDrive) gates.push(gate(day, 'start', i, 'start'))
    if (span.kind === 'stop') gates.push(gate(day, isLeft(day, i) ? 'depart' : 'camp', i, 'end'))
    if (span.kind !== 'drive') return
    const isArrival = i < lastDrive || spans[i + 1]?.kind === 'stop'
    const ending = day.forecast.timetable.isCutOff ? 'camp' : 'finish'
    gates.push(gate(day, isArrival ? 'arrive' : ending, i, 'end'))
  })
  return [...gates, gate(day, 'dusk', spans.length - 1, 'end')]
}

/** Whether a stop was stood to its end; the day's last may be cut in two by the end of the driving hours. */
export function isLeft(day: ForecastDay, span: number): boolean {
  const { spans, evening } = day.forecast.timetable
  return evening.stopLeftS === 0 || spans.findLastIndex((s) => s.kind === 'stop') > span
}

function gate(day: ForecastDay, kind: DayBudget['gates'][number]['kind'], span: number, end: 'start' | 'end') {
  const { fromMs, toMs, fromM, toM } = day.forecast.timetable.spans[span]
  const [atMs, placeM, step] =
    end === 'start' ? [fromMs, fromM, lastStepOf(day, span - 1)] : [toMs, toM, lastStepOf(day, span)]
  const name = placeName(day, placeM)
  const at = localIso(atMs, spanZones(day)[span][end])
  return { kind, name, at, km: dayKm(day, placeM), ...balanceAt(day, step) }
}

/** Last step of a span of the timetable; the one before its first step is the last of the span before. */
export function lastStepOf(day: ForecastDay, span: number): number {
  const { steps } = day.forecast
  let low = -1
  let high = steps.count - 1
  while (low < high) {
    const middle = (low + high + 1) >> 1
    if (steps.span[middle] <= span) low = middle
    else high = middle - 1
  }
  return low
}

function trackersOf(day: ForecastDay): DayBudget['trackers'] {
  const { car } = day.race
  const held = car.trackers.flatMap((tracker, i) =>
    channelsOf(tracker).map((own) => ({ own, string: car.array.strings.models[i].name })),
  )
  return day.forecast.balance.trackers.map((t, i) => ({
    name: held[i].own.name,
    string: held[i].string,
    inputWh: t.inputJ * WH,
    lossWh: t.lossJ * WH,
    standbyWh: t.standbyJ * WH,
    deniedWh: t.deniedJ * WH,
    meanInputV: t.inputJ > 0 ? t.inputJV / t.inputJ : 0,
    fell: Array.from(t.fellJ, (J, n) => ({
      fromW: (n * held[i].own.window.maxW) / t.fellJ.length,
      toW: ((n + 1) * held[i].own.window.maxW) / t.fellJ.length,
      wh: J * WH,
    })),
    limits: [...t.limits].map(([limit, sum]) => ({
      limit,
      minutes: sum.durationS / 60,
      deniedWh: sum.deniedJ * WH,
    })),
  }))
}

/** Late and early arrivals and, on the last day, road not driven. */
function penaltyMin({ forecast: { timetable }, penalties, dayIndex, race }: ForecastDay): number {
  const { lateMinPerMin, lateFreeMin, mostLatePenaltyMin = Number.POSITIVE_INFINITY } = penalties
  const late = timetable.late.map(({ byS }) =>
    Math.min(Math.max(byS / 60 - lateFreeMin, 0) * lateMinPerMin, mostLatePenaltyMin),
  )
  const early = timetable.early.map(({ byS }) => (byS / 60) * penalties.earlyMinPerMin)
  const isLast = dayIndex === race.days.length - 1
  const leftKm = isLast ? (race.course.lengthM - timetable.evening.placeM) / 1000 : 0
  return [...late, ...early].reduce((sum, min) => sum + min, leftKm * penalties.unfinishedMinPerKm)
}
