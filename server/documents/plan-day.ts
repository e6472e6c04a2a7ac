import { storedJ } from '../engine/battery.ts'
import { holds } from '../engine/planner/judge.ts'
import { type DayPlan, type Judged, planDay } from '../engine/planner/plan-day.ts'
import { furthestDay } from '../engine/planner/furthest.ts'
import { limitCosts } from '../engine/planner/limit-costs.ts'
import { fastestThatMeets } from '../engine/search.ts'
import { ENGINE_VERSION } from '../engine/version.ts'
import { dayBudget } from './budget-day.ts'
import { type DrivenDay, drivenRace, wantedCharge } from './forecast.ts'
import { clock, localIso } from './local-time.ts'
import type { PlanDocument } from './plan.ts'
import { plannedText } from './plan-outcome.ts'
import { planRanges } from './plan-ranges.ts'
import type { PlanRequest } from './plan-request.ts'
import { campName, campOf, edgeKm, endedBy } from './plan-camp.ts'
import { bestSpeeds, sectionSpeeds } from './plan-speeds.ts'
import { finishName, whyNotPlanned } from './plan-why.ts'

const WH = 1 / 3600
const MIN_MS = 60_000
/** A price every so often along the road. [M] */
const PRICE_EVERY_M = 10_000

/**
 * The plan of one day.
 *
 * @throws InputError when the documents do not fit together: field, value and what was expected
 */
export function planDocuments(request: PlanRequest, tell: Tell = () => {}): PlanDocument {
  tell({ step: 'Laying out the day', share: 0 })
  const { days, assumptions } = drivenRace({ ...request, speeds: QUICK }, (day) => day)
  const day = days[0]
  const targetCharge = wantedCharge(day, request.targetPct)
  const head = {
    engineVersion: ENGINE_VERSION,
    race: request.race.name,
    car: request.car.name,
    date: day.date,
    zone: day.zone,
    assumptions,
    target: { wh: storedJ(day.race.car.pack, targetCharge) * WH, chargePct: targetCharge * 100 },
  }
  const timed = { ...day, race: endedBy(day, request.byTime) }
  const task = { race: timed.race, dayIndex: day.dayIndex, opening: day.opening, targetCharge }
  tell({ step: 'Looking for the best speeds', share: 0.1 })
  const plan = planDay(task)
  if (plan?.best.verdict.isFinished === true) {
    tell({ step: 'Drawing days that differ', share: 0.6 })
    return { ...head, ...planned(request, timed, plan, targetCharge) }
  }
  const why = { ...NOTHING, ...whyNotPlanned(timed, targetCharge) }
  if (why.impossible === null || (why.impossible.why === 'target' && request.objective === 'earliest'))
    return { ...head, ...why }
  tell({ step: 'Looking how far the day can come', share: 0.3 })
  const furthest = furthestDay(task, (piece) => campName(timed, piece))
  if (furthest === null) return { ...head, ...why }
  tell({ step: 'Drawing days that differ', share: 0.8 })
  const cut = { ...timed, race: furthest.race }
  const { camp, outcome } = campOf(timed, furthest)
  // Tables guess how far the hours reach; the plan that goes furthest knows.
  const impossible = { ...why.impossible, reachedKm: camp.km }
  return { ...head, ...planned(request, cut, furthest.plan, targetCharge), camp, outcome, impossible }
}

/** Is told how far the work is. */
type Tell = (progress: { step: string; share: number }) => void

/** A speed to lay the day out with before it is planned. */
const QUICK = { kind: 'constant' as const, speedKmh: 70 }

const NOTHING = {
  best: null,
  forPeople: null,
  constant: null,
  bound: null,
  camp: null,
  prices: [],
  limits: [],
  ranges: null,
  steady: null,
  impossible: null,
}

function planned(
  request: PlanRequest,
  day: DrivenDay,
  plan: DayPlan,
  targetCharge: number,
): Omit<PlanDocument, keyof Head> {
  const { best, forPeople } = plan
  const bestMs = best.verdict.arrivalMs
  const withinMin = Math.max(bestMs - plan.boundMs, 0) / MIN_MS
  const of = asDay(day, forPeople, targetCharge)
  const at = clock(Math.round(bestMs / MIN_MS) * MIN_MS, day.zone)
  return {
    ...NOTHING,
    outcome: { kind: 'planned', text: plannedText(finishName(day), at, best.verdict, withinMin * 60) },
    best: { speeds: bestSpeeds(day, plan), ...figures(day, best) },
    forPeople: {
      speeds: sectionSpeeds(day, plan),
      ...figures(day, forPeople),
      sections: sectionsOn(day, plan),
      costMin: (forPeople.verdict.arrivalMs - bestMs) / MIN_MS,
      budget: dayBudget(of),
    },
    constant: constantOf(day, targetCharge, bestMs),
    bound: holds(best.verdict) ? { arriveAt: localIso(plan.boundMs, day.zone), withinMin } : null,
    prices: pricesOf(day, plan),
    limits: limitCosts(plan).map(({ what, costS }) => ({ what, label: LIMIT_LABELS[what], costMin: costS / 60 })),
    ...planRanges(request, day, plan),
  }
}

type Head = Pick<PlanDocument, 'engineVersion' | 'race' | 'car' | 'date' | 'zone' | 'assumptions' | 'target'>

const LIMIT_LABELS = { limits: 'Speed limits', reserve: 'Reserve on the way', target: 'Charge wanted at the close' }

/** The day with another forecast of it. */
export const asDay = (day: DrivenDay, judged: Judged, targetCharge: number): DrivenDay => ({
  ...day,
  forecast: judged.forecast,
  wantedMps: judged.speedMps,
  heldKmh: null,
  search: null,
  targetCharge,
})

/** Arrival, driving and battery of a judged day. */
export function figures(day: DrivenDay, { forecast, verdict }: Judged) {
  const { pack, reserveCharge } = day.race.car
  const { spans } = forecast.timetable
  const setOffMs = spans.find((span) => span.kind === 'drive')?.fromMs ?? verdict.arrivalMs
  const lowestJ = forecast.lowestStep < 0 ? forecast.openingJ : forecast.balance.storedJ[forecast.lowestStep]
  return {
    arriveAt: localIso(verdict.arrivalMs, day.zone),
    drivingMin: (verdict.arrivalMs - setOffMs) / MIN_MS,
    closingWh: forecast.closingJ * WH,
    closingPct: forecast.closing.charge * 100,
    leastSpareWh: (lowestJ - storedJ(pack, reserveCharge)) * WH,
  }
}

function constantOf(day: DrivenDay, targetCharge: number, bestMs: number): PlanDocument['constant'] {
  const found = fastestThatMeets(day.race, day.dayIndex, day.opening, targetCharge, { lowestKmh: 30, highestKmh: 130 })
  const arrivalMs = found.forecast.timetable.spans.findLast((span) => span.kind === 'drive')?.toMs
  if (!found.meetsTarget || arrivalMs === undefined || found.forecast.timetable.isRoadLeft) return null
  return {
    speedKmh: found.speedKmh,
    arriveAt: localIso(arrivalMs, day.zone),
    laterMin: (arrivalMs - bestMs) / MIN_MS,
  }
}

/** The sections for people, from where the day starts. */
export const sectionsOn = (day: DrivenDay, { reach, forPeople }: DayPlan) =>
  forPeople.sections.map(({ firstPiece, endPiece, speedKmh }) => ({
    stage: stageOf(day, reach.first + firstPiece),
    fromKm: edgeKm(day, reach.first + firstPiece),
    toKm: edgeKm(day, reach.first + endPiece),
    speedKmh,
  }))

const stageOf = (day: DrivenDay, piece: number): string =>
  day.race.stages[day.race.course.stages.findIndex((stage) => piece < stage.endPiece)]?.name ?? ''

function pricesOf(day: DrivenDay, { sPerJ, reach }: DayPlan): PlanDocument['prices'] {
  const { pieces } = day.race.course
  let nextM = Number.NEGATIVE_INFINITY
  const prices: PlanDocument['prices'] = []
  for (let i = 0; i < reach.count; i++) {
    const fromM = pieces.fromM[reach.first + i]
    if (fromM < nextM) continue
    prices.push({ km: edgeKm(day, reach.first + i), sPerWh: sPerJ[i] * 3600 })
    nextM = fromM + PRICE_EVERY_M
  }
  return prices
}
