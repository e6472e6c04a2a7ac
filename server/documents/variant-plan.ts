import { type DayForecast, forecastDay, type Opening } from '../engine/forecast.ts'
import { touching } from '../engine/ensemble/ranges.ts'
import { ledger } from '../engine/ledger.ts'
import { planSun, reachOf } from '../engine/planner/engine-tables.ts'
import { judge } from '../engine/planner/judge.ts'
import { type Judged, planDay, settledTables } from '../engine/planner/plan-day.ts'
import { dayBudget } from './budget-day.ts'
import { ledgerDocument } from './budget-ledger.ts'
import type { DrivenDay } from './forecast.ts'
import { clock, localIso } from './local-time.ts'
import { asDay, figures } from './plan-day.ts'
import { plannedText } from './plan-outcome.ts'
import { energyCauses } from './energy-causes.ts'
import { drawDays } from './plan-ranges.ts'
import type { PlanRequest } from './plan-request.ts'
import { sectionSpeeds } from './plan-speeds.ts'
import { finishName, whyNotPlanned } from './plan-why.ts'
import type { SpeedsDocument } from './speeds.ts'
import type { EnergyCause, VariantAnswer, VariantDocument, VariantFigures } from './variant.ts'
import { type VariantDay, variantDay } from './variant-day.ts'

const MIN_MS = 60_000

/** What one plan, or one forecast at given speeds, comes to; what cannot be driven has an outcome alone. */
export interface VariantPlan {
  outcome: VariantAnswer['outcome']
  driven: Driven | null
}

/** A day that is driven to its end. */
export interface Driven {
  /** At speeds for people, or those given. [MS] */
  peopleMs: number
  /** With one speed a piece; the same where speeds were given. [MS] */
  bestMs: number
  figures: VariantFigures
  /** What adds to and takes from the closing balance: together they are it. */
  lines: EnergyCause[]
}

/** The base with all that its variants are put beside. */
export interface VariantBase extends VariantPlan {
  opening: Opening
  /** Spread of the wandering factor on the sun that the base was drawn with, 0..1. */
  sunWander?: number
  /** Speeds for people, and the road that they are of. (pieces) */
  drive: { speedMps: Float64Array; fromM: Float64Array; speeds: SpeedsDocument } | null
  assumptions: string[]
  race: string
  car: string
  zone: string
}

/**
 * The day without any change, planned.
 *
 * @throws InputError when the documents do not fit together
 */
export function planBase(request: PlanRequest): VariantBase {
  const found = variantDay(request, { name: '' })
  const { day, assumptions } = found
  const { plan, sunWander, speedMps, speeds } = planned(found)
  const drive =
    speedMps === undefined || speeds === undefined ? null : { speedMps, fromM: day.race.course.pieces.fromM, speeds }
  const { race, car } = request
  const names = { race: race.name, car: car.name, zone: day.zone }
  return { ...plan, ...names, opening: day.opening, sunWander, drive, assumptions }
}

/**
 * The day as a variant has it, planned, or forecast at the variant's own speeds.
 *
 * Members are drawn with the base's seed, and with its spread of the sky where the sky is the base's.
 *
 * @throws InputError when the documents do not fit together
 */
export function planVariant(
  request: PlanRequest,
  variant: VariantDocument,
  base: VariantBase,
): VariantPlan & Pick<VariantAnswer, 'assumptions' | 'atBaseSpeeds'> {
  const found = variantDay(request, variant, base.opening)
  const sunWander = variant.sky === undefined ? base.sunWander : undefined
  const { plan } = variant.speeds === undefined ? planned(found, sunWander) : forecast(found, variant.speeds, sunWander)
  return {
    ...plan,
    assumptions: found.assumptions.filter((one) => !base.assumptions.includes(one)),
    atBaseSpeeds: atBaseSpeeds(request, variant, found, base),
  }
}

interface Found {
  plan: VariantPlan
  sunWander?: number
  speedMps?: Float64Array
  speeds?: SpeedsDocument
}

function planned({ request, day, targetCharge }: VariantDay, sunWander?: number): Found {
  const { race, dayIndex, opening } = day
  const plan = planDay({ race, dayIndex, opening, targetCharge })
  if (plan?.best.verdict.isFinished !== true) {
    const { outcome } = whyNotPlanned(day, targetCharge)
    const kind = outcome.kind === 'parked' ? 'parked' : 'impossible'
    return { plan: { outcome: { ...outcome, kind }, driven: null } }
  }
  const { best, forPeople } = plan
  const bestMs = best.verdict.arrivalMs
  const at = clock(Math.round(bestMs / MIN_MS) * MIN_MS, day.zone)
  const text = plannedText(finishName(day), at, best.verdict, Math.max(bestMs - plan.boundMs, 0) / 1000)
  const speeds = sectionSpeeds(day, plan)
  const drawn = drawDays({ ...request, sunWander }, day, plan)
  return {
    plan: {
      outcome: { kind: 'planned', text },
      driven: driven(day, { forPeople, bestMs, drawn: drawn.drawn, targetJ: plan.tables.targetJ, speeds }),
    },
    sunWander: drawn.spreads.sunWander,
    speedMps: forPeople.speedMps,
    speeds,
  }
}

function forecast({ request, day, targetCharge }: VariantDay, speeds: SpeedsDocument, sunWander?: number): Found {
  const { race, dayIndex } = day
  const judged = judgedAt(day, day.wantedMps, targetCharge)
  const { outcome } = dayBudget(asDay(day, judged, targetCharge))
  if (outcome.kind === 'parked') return { plan: { outcome: { kind: 'parked', text: outcome.text }, driven: null } }
  if (!judged.verdict.isFinished) return { plan: { outcome: { kind: 'impossible', text: outcome.text }, driven: null } }
  const path = planSun(race.days[dayIndex])
  const reach = reachOf({ race, dayIndex, base: judged.forecast, path, targetCharge })
  const { tables } = settledTables({ race, dayIndex, targetCharge, path, reach, drive: () => judged }, judged, 0)
  const { drawn } = drawDays({ ...request, sunWander }, day, { tables, reach, best: judged, forPeople: judged })
  const bestMs = judged.verdict.arrivalMs
  return {
    plan: {
      outcome: { kind: 'forecast', text: outcome.text },
      driven: driven(day, { forPeople: judged, bestMs, drawn, targetJ: tables.targetJ, speeds }),
    },
  }
}

function judgedAt({ race, dayIndex, opening }: DrivenDay, speedMps: Float64Array, targetCharge: number): Judged {
  const made = forecastDay(race, dayIndex, opening, speedMps, planSun(race.days[dayIndex]))
  return { speedMps, forecast: made, verdict: judge(race, made, targetCharge) }
}

function driven(
  day: DrivenDay,
  of: {
    forPeople: Judged
    bestMs: number
    drawn: ReturnType<typeof drawDays>['drawn']
    targetJ: number
    speeds: SpeedsDocument
  },
): Driven {
  const { forPeople, bestMs, drawn, targetJ, speeds } = of
  const { arriveAt, drivingMin, closingWh, closingPct, leastSpareWh } = figures(day, forPeople)
  return {
    peopleMs: forPeople.verdict.arrivalMs,
    bestMs,
    lines: linesOf(day, forPeople.forecast),
    figures: {
      arriveAt,
      bestArriveAt: localIso(bestMs, day.zone),
      drivingMin,
      closingWh,
      closingPct,
      overTargetWh: closingWh - targetJ / 3600,
      leastSpareWh,
      touchesReservePct: touching(drawn).share * 100,
      missesTargetPct: (100 * drawn.duskJ.filter((J) => J < targetJ).length) / drawn.count,
      speeds,
    },
  }
}

/** Opening balance, income and spendings of a day by their lines; spendings are negative, the sum is the close. */
function linesOf({ race, stages }: DrivenDay, { timetable, balance, openingJ, closingJ }: DayForecast): EnergyCause[] {
  const { spans } = timetable
  const of = ledgerDocument(
    ledger(spans, balance.spans, [...spans.keys()], { openingJ, closingJ }),
    race.stages,
    stages,
  )
  return [
    { id: 'opening', label: 'Charge at the start', wh: of.openingWh },
    ...of.income,
    ...of.spendings.map((line) => ({ ...line, wh: -line.wh })),
    { id: 'short', label: 'Asked of an empty pack', wh: of.shortWh },
  ]
}

/** The changed day at the base's speeds; null where there is no base, or the speeds do not fit the road. */
function atBaseSpeeds(
  request: PlanRequest,
  variant: VariantDocument,
  { day, targetCharge }: VariantDay,
  { drive, driven: before, opening }: VariantBase,
): VariantAnswer['atBaseSpeeds'] {
  if (drive === null || before === null) return null
  const { fromM } = day.race.course.pieces
  const isSameRoad = fromM.length === drive.fromM.length && fromM.every((M, i) => M === drive.fromM[i])
  const { speeds } = drive
  const at = isSameRoad
    ? day
    : onOtherRoad(day.stages, speeds)
      ? variantDay(request, { ...variant, speeds }, opening).day
      : null
  if (at === null) return null
  const { forecast: made, verdict, ...judged } = judgedAt(at, isSameRoad ? drive.speedMps : at.wantedMps, targetCharge)
  if (Number.isNaN(verdict.arrivalMs)) return null
  const { arriveAt, closingWh, leastSpareWh } = figures(at, { forecast: made, verdict, ...judged })
  return {
    finishes: verdict.isFinished,
    arriveAt,
    closingWh,
    leastSpareWh,
    causes: energyCauses(linesOf(at, made), before.lines),
  }
}

/** Whether the base's speeds name stages that another road still has. */
const onOtherRoad = (stages: DrivenDay['stages'], speeds: SpeedsDocument): boolean =>
  speeds.kind === 'sections' &&
  speeds.sections.every((section) => stages.some(({ stage }) => stage.id === section.stage))
