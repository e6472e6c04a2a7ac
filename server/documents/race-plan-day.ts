import { storedJ } from '../engine/battery.ts'
import { rangeOf, touching } from '../engine/ensemble/ranges.ts'
import { type DayForecast, forecastDay, type Opening } from '../engine/forecast.ts'
import { holds } from '../engine/planner/judge.ts'
import { type NightCost, onTheRoadS } from '../engine/planner/night-costs.ts'
import { ordinarySpeeds } from '../engine/planner/ordinary.ts'
import type { DayPlan } from '../engine/planner/plan-day.ts'
import type { RaceDay } from '../engine/planner/plan-race.ts'
import { placeName } from './budget-day.ts'
import type { DrivenDay } from './forecast.ts'
import { clockOf, dayName, localIso, offsetMin } from './local-time.ts'
import { campOf } from './plan-camp.ts'
import { asDay, figures, sectionsOn } from './plan-day.ts'
import { drawDays, whRange } from './plan-ranges.ts'
import { sectionSpeeds } from './plan-speeds.ts'
import { finishName, whyNotPlanned } from './plan-why.ts'
import type { RacePlanDay } from './race-plan.ts'
import type { RacePlanRequest } from './race-plan-request.ts'
import { closeText, drivenText } from './race-plan-words.ts'

const WH = 1 / 3600
const MIN_MS = 60_000
/** Points of the battery's line on a day, about. */
const POINTS = 60

/** A day as the planner left it. */
export interface PlannedDay {
  day: RaceDay
  /** How it opens; null where a day before it has no plan. */
  opening: Opening | null
  /** The next driving day's plan. */
  next: DayPlan | null
  /** Closing charge that was planned for. */
  target: number
  cost: NightCost | null
}

/**
 * One day of a race plan.
 *
 * @param of    the day, with the whole race; opening and forecast still those of the first
 */
export function racePlanDay(request: RacePlanRequest, of: DrivenDay, planned: PlannedDay): RacePlanDay {
  const { day, opening, target } = planned
  const { dayIndex, date, zone, race } = of
  const base = opening === null ? of : { ...of, opening, targetCharge: target }
  const head = { date, zone, utcOffsetMin: offsetMin(race.days[dayIndex].opensMs, zone) }
  if (opening === null) return { ...head, ...EMPTY, ...waiting(of), close: closeOf(request, of, planned) }
  if (day.isParked) return { ...head, ...EMPTY, ...parked(base), close: closeOf(request, of, planned) }
  if (day.plan === null) {
    const { outcome, impossible } = whyNotPlanned(base, target)
    const text = `${dayName(date)}: ${outcome.text}`
    const places = { from: startName(base), to: finishName(base), opening: charged(base, opening.charge) }
    return { ...head, ...EMPTY, ...places, state: 'impossible', text, impossible, close: closeOf(request, of, planned) }
  }
  return { ...head, ...driven(request, base, { ...planned, plan: day.plan }) }
}

const EMPTY = { road: null, camp: null, ranges: null, impossible: null, series: null, drives: [] }

function waiting(of: DrivenDay) {
  const text = `${dayName(of.date)} waits: a day before it has no plan.`
  const { stages, dayIndex } = of
  const stage = stages.find((one) => one.dayIndex === dayIndex)?.stage
  return {
    state: 'waiting' as const,
    text,
    from: stage?.start ?? '',
    to: stage === undefined ? '' : finishName(of),
    opening: null,
  }
}

function parked(base: DrivenDay) {
  const { race, dayIndex, opening } = base
  const forecast = forecastDay(race, dayIndex, opening, ordinarySpeeds(race))
  const day = { ...base, forecast }
  const place = placeName(day, opening.standing.placeM)
  const text = `${dayName(base.date)}: the car is not driven and closes with ${Math.round(forecast.closing.charge * 100)} %.`
  return {
    state: 'parked' as const,
    text,
    from: place,
    to: place,
    opening: charged(base, opening.charge),
    series: seriesOf(forecast, race.days[dayIndex].opensMs),
  }
}

function driven(request: RacePlanRequest, base: DrivenDay, planned: PlannedDay & { plan: DayPlan }) {
  const { day, plan, target } = planned
  const { race, dayIndex, date, zone } = base
  const { best, forPeople } = plan
  const isCamp = endPieceOf(day.race, dayIndex) !== endPieceOf(race, dayIndex)
  const cut = asDay({ ...base, race: day.race }, forPeople, target)
  const of = { ...cut, race }
  const { arriveAt, drivingMin, closingPct, leastSpareWh } = figures(cut, forPeople)
  const { spans, evening } = forPeople.forecast.timetable
  const camp = isCamp ? campOf(of, { endPiece: endPieceOf(day.race, dayIndex) }) : null
  const why = isCamp ? whyNotPlanned(base, target) : null
  const finish = finishName(of)
  const at = clockOf(arriveAt)
  const text =
    camp === null
      ? drivenText({ date, finish, at, drivingMin, closingPct }, best.verdict)
      : `${dayName(date)}: ${camp.outcome.text}${camp.camp.goesOn ? ' The next day goes on from there.' : ''}`
  return {
    state: isCamp ? ('camp' as const) : ('driven' as const),
    text,
    from: placeName(of, spans[0].fromM),
    to: placeName(of, evening.placeM),
    opening: charged(base, base.opening.charge),
    road: {
      setOffAt: localIso(spans.find(({ kind }) => kind === 'drive')?.fromMs ?? forPeople.verdict.arrivalMs, zone),
      arriveAt,
      drivingMin,
      bestMin: onTheRoadS(best.forecast) / 60,
      bestArriveAt: localIso(best.verdict.arrivalMs, zone),
      withinMin: holds(best.verdict) ? Math.max(best.verdict.arrivalMs - plan.boundMs, 0) / MIN_MS : null,
      keepsAll: holds(best.verdict),
      km: spans.reduce((sum, span) => sum + span.toM - span.fromM, 0) / 1000,
      leastSpareWh,
      speeds: sectionSpeeds(cut, plan),
      sections: sectionsOn(cut, plan),
    },
    camp: camp?.camp == null ? null : { until: camp.camp.until, leftKm: camp.camp.leftKm },
    close: closeOf(request, base, planned),
    ranges: rangesOf(request, cut, plan),
    impossible: why?.impossible ?? null,
    series: seriesOf(forPeople.forecast, race.days[dayIndex].opensMs),
    drives: spans.filter(({ kind }) => kind === 'drive').map(({ fromMs, toMs }) => ({ fromMs, toMs })),
  }
}

/** The piece in front of which a day's road ends. */
const endPieceOf = ({ course, days }: DrivenDay['race'], d: number): number =>
  course.stages[days[d].lastStage]?.endPiece ?? 0

const startName = (day: DrivenDay): string => placeName(day, day.opening.standing.placeM)

const charged = ({ race }: DrivenDay, charge: number) => ({
  wh: storedJ(race.car.pack, charge) * WH,
  chargePct: charge * 100,
})

function closeOf(
  request: RacePlanRequest,
  of: DrivenDay,
  { day, target, cost, next }: PlannedDay,
): RacePlanDay['close'] {
  const { race, dayIndex, date } = of
  const isLast = dayIndex === race.days.length - 1
  const ordered = request.nights.find((night) => night.date === date)
  const isGiven = ordered === undefined ? request.race.days[dayIndex].targetPct !== undefined : ordered.kind === 'fixed'
  const charge = day.plan?.forPeople.forecast.closing.charge ?? day.closing?.charge
  const { plan } = day
  const close = {
    kind: isGiven
      ? ordered === undefined
        ? ('race' as const)
        : ('order' as const)
      : isLast
        ? ('reserve' as const)
        : ('found' as const),
    wanted: charged(of, target),
    closing: charge === undefined ? null : charged(of, charge),
    costMin: cost === null ? null : cost.costS / 60,
    freePct: cost === null ? null : cost.freeCharge * 100,
    eveningSPerWh: plan === null ? null : plan.sPerJ[plan.reach.count] / WH,
    morningSPerWh: next === null ? null : next.sPerJ[0] / WH,
  }
  return { ...close, text: closeText(close, { isLast, reservePct: race.car.reserveCharge * 100 }) }
}

function rangesOf(request: RacePlanRequest, day: DrivenDay, plan: DayPlan): RacePlanDay['ranges'] {
  const { drawn } = drawDays(request, day, plan)
  const planned = plan.forPeople.forecast.closingJ
  const lateS = rangeOf(drawn.duskJ.map((J) => (planned - J) * plan.sPerJ[0]))
  return {
    members: request.members,
    closingWh: whRange(rangeOf(drawn.duskJ)),
    lateMin: { p10: lateS.p10 / 60, p50: lateS.p50 / 60, p90: lateS.p90 / 60 },
    touchesReservePct: touching(drawn).share * 100,
  }
}

/** The battery through a day: its opening, every few steps and the ends of its spans. */
function seriesOf(
  { steps, balance, timetable, openingJ }: DayForecast,
  opensMs: number,
): NonNullable<RacePlanDay['series']> {
  const every = Math.max(Math.floor(steps.count / POINTS), 1)
  const isEnd = (i: number): boolean => i === steps.count - 1 || steps.span[i + 1] !== steps.span[i]
  const kept = Array.from({ length: steps.count }, (_, i) => i).filter((i) => i % every === every - 1 || isEnd(i))
  const firstMs = timetable.spans[0]?.fromMs ?? opensMs
  return {
    atMs: [Math.round(firstMs), ...kept.map((i) => Math.round(steps.toMs[i]))],
    wh: [openingJ * WH, ...kept.map((i) => balance.storedJ[i] * WH)],
  }
}
