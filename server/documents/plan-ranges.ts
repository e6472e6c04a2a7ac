import { daySun } from '../engine/forecast.ts'
import { courseOf, members } from '../engine/ensemble/members.ts'
import { rangeAt, rangeOf, sharesOfSpread, touching } from '../engine/ensemble/ranges.ts'
import { robustPlan } from '../engine/ensemble/robust.ts'
import { type DayCause, type DayEffect, dayEffects } from '../engine/ensemble/day-effects.ts'
import { type Cause, skySpread, type Spreads } from '../engine/ensemble/spread.ts'
import { forecastDay } from '../engine/forecast.ts'
import { judge } from '../engine/planner/judge.ts'
import { clearPowerW, loadPerHeadwind, sunShare } from '../engine/planner/passing.ts'
import type { DayPlan, Judged } from '../engine/planner/plan-day.ts'
import { refine, type Refined } from '../engine/planner/refine.ts'
import { type Drive, driveAlong } from '../engine/planner/simulate.ts'
import { dayKm, placeName } from './budget-day.ts'
import type { DrivenDay } from './forecast.ts'
import { localIso } from './local-time.ts'
import type { PlanDocument } from './plan.ts'
import type { PlanRequest } from './plan-request.ts'
import { bestSpeeds } from './plan-speeds.ts'

const WH = 1 / 3600
/** A gate at least so often. [M] */
const GATE_EVERY_M = 25_000
/** Members drawn for each cause alone. */
const CAUSE_MEMBERS = 500

const LABELS: Record<Cause | DayCause, string> = {
  sun: 'Sky',
  haze: 'Haze',
  warmth: 'Air temperature',
  wind: 'Wind',
  road: 'Road load',
  trackers: 'All trackers',
  'tracker-loss': 'Losses of',
  opening: 'Charge at the start',
}

/** What days are drawn by. */
export type Drawing = Pick<PlanRequest, 'sky' | 'spreads' | 'members' | 'seed'> & {
  /** Spread of the wandering factor on the sun, where it is that of another plan, 0..1. */
  sunWander?: number
}

/** A plan as far as days are drawn for it. */
type Drawn = Pick<DayPlan, 'tables' | 'reach' | 'best'> & { forPeople: Judged }

/** Days that differ from the forecast as its spreads say, driven at the plan for people. */
export function drawDays(request: Drawing, { race, dayIndex, opening }: DrivenDay, plan: Drawn) {
  const { tables, reach, forPeople, best } = plan
  const { linke, airC, trackerLossPct } = request.spreads
  const effects = dayEffects(
    { race, dayIndex, opening, reach, forecast: forPeople.forecast, speedMps: forPeople.speedMps },
    { linke, airC, trackerLoss: trackerLossPct / 100 },
  )
  const path = daySun(race.days[dayIndex])
  const clearW = clearPowerW(race, path, best.forecast, reach)
  const spreads = spreadsOf(request, plan, clearW)
  const lay = (drive: Drive) => {
    const perHeadwind = loadPerHeadwind(race, best.forecast, reach, drive.speedMps)
    return courseOf(tables, drive, { clearW, perHeadwind, spreads, effects })
  }
  const course = lay(driveAlong(tables, forPeople.speedMps, reach.first))
  return { spreads, lay, course, drawn: members(course, spreads, request.members, request.seed) }
}

/** A range of energies in watt-hours. */
export const whRange = ({ p10, p50, p90 }: { p10: number; p50: number; p90: number }) => ({
  p10: p10 * WH,
  p50: p50 * WH,
  p90: p90 * WH,
})

/** Ranges of the plan for people, and a plan that seldom touches the reserve. */
export function planRanges(
  request: PlanRequest,
  day: DrivenDay,
  plan: DayPlan,
): Pick<PlanDocument, 'ranges' | 'steady'> {
  const { tables, reach, forPeople } = plan
  const { spreads, lay, course, drawn } = drawDays(request, day, plan)
  const touch = touching(drawn)
  const shares = sharesOfSpread(course, spreads, CAUSE_MEMBERS, request.seed)
  const price = plan.sPerJ[0]
  const closing = rangeOf(drawn.duskJ)
  const planned = forPeople.forecast.closingJ
  const lateS = rangeOf(drawn.duskJ.map((J) => (planned - J) * price))
  const ranges = {
    members: request.members,
    seed: request.seed,
    closingWh: whRange(closing),
    harvestWh: whRange(rangeOf(drawn.harvestJ)),
    lateMin: { p10: lateS.p10 / 60, p50: lateS.p50 / 60, p90: lateS.p90 / 60 },
    touchesReservePct: touch.share * 100,
    touchesMostKm: touch.edge < 0 ? null : edgeKm(day, reach.first + touch.edge),
    missesTargetPct: (100 * drawn.duskJ.filter((J) => J < tables.targetJ).length) / drawn.count,
    gates: gatesOf(day, plan).map(({ edge, atMs, plannedJ }) => ({
      name: placeName(day, edgeM(day, reach.first + edge)),
      km: edgeKm(day, reach.first + edge),
      at: localIso(atMs, day.zone),
      plannedWh: plannedJ * WH,
      wh: whRange(rangeAt(drawn, tables.pieces, edge)),
    })),
    causes: shares
      .map(({ cause, share }) => ({ ...named(cause), sharePct: share * 100 }))
      .sort((a, b) => b.sharePct - a.sharePct),
  }
  return { ranges, steady: steadyOf(request, day, plan, spreads, ({ drive }) => lay(drive)) }
}

function named(of: Cause | DayEffect): { cause: string; label: string } {
  if (typeof of === 'string') return { cause: of, label: LABELS[of] }
  const { cause, tracker } = of
  return tracker === undefined
    ? { cause, label: LABELS[cause] }
    : { cause: `${cause} ${tracker}`, label: `${LABELS[cause]} ${tracker}` }
}

function spreadsOf(
  { spreads: of, sky, sunWander }: Drawing,
  { tables, reach, best }: Drawn,
  clearW: Float64Array,
): Spreads {
  const { spans } = best.forecast.timetable
  const middleMs = (spans[0].fromMs + spans[spans.length - 1].toMs) / 2
  const clearness = sunShare(best.forecast, clearW, reach)
  const wander =
    of.sunWanderPct === undefined
      ? (sunWander ?? skySpread((middleMs - Date.parse(sky.issuedAt)) / 1000, clearness))
      : of.sunWanderPct / 100
  return {
    sunDay: of.sunDayPct / 100,
    sunWander: wander,
    wanderS: of.wanderMin * 60,
    wanderM: of.wanderKm * 1000,
    headwindMps: of.headwindMps,
    roadLoad: of.roadPct / 100,
    trackers: of.trackersPct / 100,
    openingJ: (of.openingPct / 100) * tables.pack.ceilingJ,
  }
}

const edgeM = (day: DrivenDay, piece: number): number => {
  const { pieces, lengthM } = day.race.course
  return piece < pieces.count ? pieces.fromM[piece] : lengthM
}
const edgeKm = (day: DrivenDay, piece: number): number => Math.max(dayKm(day, edgeM(day, piece)), 0)

/** Edges at which the battery is compared: every stop, every 25 km and the end, with what the plan for people has there. */
function gatesOf(
  day: DrivenDay,
  { reach, tables, forPeople }: DayPlan,
): { edge: number; atMs: number; plannedJ: number }[] {
  const { steps, balance } = forPeople.forecast
  const stops = new Set(tables.stops.map(({ beforePiece }) => beforePiece))
  const gates: { edge: number; atMs: number; plannedJ: number }[] = []
  let lastM = edgeM(day, reach.first)
  for (let edge = 1; edge <= reach.count; edge++) {
    const M = edgeM(day, reach.first + edge)
    if (M - lastM < GATE_EVERY_M && !stops.has(edge) && edge < reach.count) continue
    const step = lastStepOn(forPeople.forecast, reach.first + edge - 1)
    if (step < 0) continue
    gates.push({ edge, atMs: steps.toMs[step], plannedJ: balance.storedJ[step] })
    lastM = M
  }
  return gates
}

/** The last step driven on a piece; -1 where it is not driven. */
function lastStepOn({ steps }: DayPlan['best']['forecast'], piece: number): number {
  for (let i = steps.count - 1; i >= 0; i--) if (steps.piece[i] === piece && steps.speedMps[i] > 0) return i
  return -1
}

function steadyOf(
  request: PlanRequest,
  day: DrivenDay,
  plan: DayPlan,
  spreads: Spreads,
  lay: (refined: Refined) => ReturnType<typeof courseOf>,
): PlanDocument['steady'] {
  const { tables, reach, best } = plan
  const start = driveAlong(tables, best.speedMps, reach.first)
  const of = { spreads, promise: request.promisePct / 100, seed: request.seed }
  const robust = robustPlan(tables, refine(tables, start), lay, of)
  if (robust.refined.track.shortJ > 0 || robust.touches > of.promise) return null
  const speedMps = best.speedMps.slice()
  speedMps.set(robust.refined.drive.speedMps, reach.first)
  const forecast = forecastDay(day.race, day.dayIndex, day.opening, speedMps)
  const verdict = judge(day.race, forecast, 0)
  return {
    promisePct: request.promisePct,
    touchesPct: robust.touches * 100,
    costMin: (verdict.arrivalMs - best.verdict.arrivalMs) / 60_000,
    arriveAt: localIso(verdict.arrivalMs, day.zone),
    speeds: bestSpeeds(day, { ...plan, best: { speedMps, forecast, verdict } }),
  }
}
