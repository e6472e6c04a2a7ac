import { type DayForecast, forecastDay, type Opening, type Race } from '../forecast.ts'
import type { SunPath } from '../sun.ts'
import { bestDrive } from './best-drive.ts'
import { earliestArrival } from './bound-day.ts'
import type { DayTables } from './day-tables.ts'
import {
  isNear,
  motorMps,
  planSun,
  type Reach,
  reachOf,
  type SunAhead,
  sunAhead,
  tablesAlong,
} from './engine-tables.ts'
import { holds, isBetterVerdict, judge, type Verdict } from './judge.ts'
import { onCourse, ordinarySpeeds } from './ordinary.ts'
import { refine, type Refined } from './refine.ts'
import { namedMps, type Section, sectionsFor } from './sections.ts'
import { settle } from './settle.ts'
import { driveAlong, simulate } from './simulate.ts'

/** A day to plan. */
export interface DayTask {
  race: Race
  dayIndex: number
  opening: Opening
  /** Usable charge wanted when the day closes, 0..1. */
  targetCharge: number
  /** Speeds that the first tables are taken along; left out, an ordinary one everywhere. [Mps] (pieces of the course) */
  startMps?: Float64Array
}

/** Speeds of a day with the forecast that judges them. */
export interface Judged {
  /** [Mps] (pieces of the course) */
  speedMps: Float64Array
  forecast: DayForecast
  verdict: Verdict
}

/** A plan for a day. */
export interface DayPlan {
  /** The earliest arrival found, one speed a piece. */
  best: Judged
  /** The same for people: whole km/h, few sections. Pieces count from the first of the day. */
  forPeople: Judged & { sections: Section[] }
  reach: Reach
  /** The tables along the best plan, reserve and target as they are wanted. */
  tables: DayTables
  /** Fastest that the motor would hold without posted limits. [Mps] (pieces of the day) */
  heldMps: Float64Array
  /** What a joule more on leaving each piece saves. [s/J] (pieces of the day + 1) */
  sPerJ: Float64Array
  /** No drive of one speed a piece arrives earlier, as the tables have it. [ms] */
  boundMs: number
}

/** Cells of the bound are no wider, and no wider than that part of the day's way to its end. [S] */
const BOUND_STEP_S = 150
const BOUND_PARTS = 100
const MOST_ROUNDS = 8
const LAST_ROUNDS = 4
const WHOLE_ROUNDS = 3
/** Speeds for people may leave so much unused. [J] */
const PEOPLE_CLOSE_J = 18_000
/** Aimed at beyond reserve and target, so that the forecast keeps them too. [J] */
const SPARE_J = 720
/** A plan whose forecast misses what the tables told by less is settled. [J, ms] */
const SETTLED_J = 900
const SETTLED_MS = 300

/**
 * The earliest arrival at the end of the day's stages that keeps reserve, stops and target.
 *
 * Frontier and refinement on tables taken from the engine; the forecast at the speeds found judges them and sets the
 * tables right along them, again and again until both agree. The best plan that a forecast found to hold is kept.
 *
 * @returns null where the tables know no drive that holds
 */
export function planDay(task: DayTask): DayPlan | null {
  const { race, dayIndex } = task
  const begun = bestDay(task)
  if (begun === null) return null
  const { day, found } = begun
  const { reach } = day
  const forPeople = peoplePlan(day, found.best)
  // Whole speeds in sections change less often and may do better: then they are what is bettered.
  const better = isBetterVerdict(forPeople.verdict, found.best.verdict)
    ? settleDown(day, forPeople, found.refined, LAST_ROUNDS)
    : null
  const { best, refined } = better ?? found
  const { tables } = settledTables(day, best, 0)
  const { opensMs } = race.days[dayIndex]
  const endS = (best.verdict.arrivalMs - opensMs) / 1000
  const along = simulate(tables, driveAlong(tables, best.speedMps, reach.first))
  const stepS = Math.min(BOUND_STEP_S, (endS - tables.start.atS) / BOUND_PARTS)
  return {
    best,
    forPeople,
    reach,
    tables,
    heldMps: motorMps({ ...day, base: best.forecast }, reach),
    sPerJ: refined.sPerJ,
    boundMs: opensMs + 1000 * earliestArrival(tables, refined.sPerJ, endS, stepS, along.atS),
  }
}

/**
 * The best speeds of a day alone, one a piece.
 *
 * @returns null where the tables know no drive that holds
 */
export function bestDay(task: DayTask): { day: DayAtWork; found: { best: Judged; refined: Refined } } | null {
  const { race, dayIndex, opening, targetCharge } = task
  const path = planSun(race.days[dayIndex])
  const drive = (speedMps: Float64Array): Judged => {
    const forecast = forecastDay(race, dayIndex, opening, speedMps, path)
    return { speedMps, forecast, verdict: judge(race, forecast, targetCharge) }
  }
  const first = drive(task.startMps ?? ordinarySpeeds(race))
  const reach = reachOf({ race, dayIndex, base: first.forecast, path, targetCharge })
  if (reach.count <= 0) return null
  const day: DayAtWork = { race, dayIndex, targetCharge, path, reach, drive, isGuessed: task.startMps === undefined }
  const found = settleDown(day, first, null, MOST_ROUNDS)
  return found === null ? null : { day, found }
}

/** What stays the same while a day is planned. */
export interface DayAtWork {
  race: Race
  dayIndex: number
  targetCharge: number
  path: SunPath
  reach: Reach
  drive: (speedMps: Float64Array) => Judged
  /** Whether the first speeds are a guess, so that their sun need only be rough. */
  isGuessed?: boolean
  /** The sun ahead as it was last worked out; overwritten. */
  sun?: SunAhead
}

/**
 * Tables along a forecast, better speeds by them, the forecast of those: until both agree. Late rounds go half the
 * way, so that what one round sets right is not undone by the next.
 *
 * @param before  the last refinement, to go on from; null starts with the frontier
 * @returns the best that any forecast found; null where the tables know no drive that holds
 */
function settleDown(
  day: DayAtWork,
  start: Judged,
  before: Refined | null,
  rounds: number,
): { best: Judged; refined: Refined } | null {
  let now = start
  let refined = before
  let best: Judged | null = before === null ? null : start
  let spareJ = SPARE_J
  for (let round = 0; round < rounds; round++) {
    const { tables, heldMps } = settledTables(day, now, spareJ)
    refined =
      refined === null
        ? bestDrive(tables)
        : refine(tables, { speedMps: heldMps, waitS: noWaits(day.reach) }, refined.multiplier)
    if (refined === null) return null
    const wayOn = round < WHOLE_ROUNDS ? 1 : 0.5
    const speedMps = refined.drive.speedMps.map((v, i) => heldMps[i] + wayOn * (v - heldMps[i]))
    const toldMs = now.verdict.arrivalMs + 1000 * (endS(tables, speedMps) - endS(tables, heldMps))
    now = day.drive(onCourse(day.race, day.reach, speedMps))
    if (best === null || isBetterVerdict(now.verdict, best.verdict)) best = now
    // What tables cannot see, as a dip inside a piece, is kept free everywhere.
    if (round >= WHOLE_ROUNDS) spareJ += Math.max(now.verdict.lackJ, 0)
    const isSame = Math.abs(now.verdict.arrivalMs - toldMs) < SETTLED_MS && day.sun?.isRough === false
    if (isSame && holds(now.verdict) && now.verdict.lackJ > -SETTLED_J - SPARE_J) break
  }
  return best === null || refined === null ? null : { best, refined }
}

/** When a drive without waits is over, by the tables. [S] */
const endS = (tables: DayTables, speedMps: Float64Array): number =>
  simulate(tables, { speedMps, waitS: new Float64Array(tables.pieces + 1) }).atS[tables.pieces]

const noWaits = (reach: Reach): Float64Array => new Float64Array(reach.count + 1)

/** Tables set right along a drive, with so much more asked than is wanted. */
export function settledTables(
  day: DayAtWork,
  now: Judged,
  spareJ = SPARE_J,
): { tables: DayTables; heldMps: Float64Array } {
  const { reach } = day
  const along = { ...day, base: now.forecast }
  if (day.sun === undefined || !isNear(day.sun, along, reach))
    day.sun = sunAhead(along, reach, soonestS(day, now), day.sun === undefined && day.isGuessed)
  const tables = tablesAlong(along, reach, day.sun)
  const { speedMps: heldMps } = driveAlong(tables, now.speedMps, reach.first)
  settle(tables, along, reach, now.forecast, heldMps)
  tables.targetJ += spareJ
  raiseFloor(tables, spareJ)
  return { tables, heldMps }
}

/** Later arrivals than that of a drive which holds are of no interest. [S] */
function soonestS({ race, dayIndex }: DayAtWork, { verdict }: Judged): number {
  const isSound = holds(verdict) && verdict.isFinished
  return isSound ? (verdict.arrivalMs - race.days[dayIndex].opensMs) / 1000 : Number.POSITIVE_INFINITY
}

const PEOPLE_ROUNDS = 4

/** Whole speeds in sections, aimed higher or lower until the forecast itself finds that they just hold. */
function peoplePlan(day: DayAtWork, best: Judged): DayPlan['forPeople'] {
  const { race, dayIndex, reach } = day
  const { tables, heldMps } = settledTables(day, best)
  const stageEnds = race.course.stages
    .slice(0, race.days[dayIndex].lastStage + 1)
    .map(({ endPiece }) => endPiece - reach.first)
    .filter((end) => end > 0)
  const waitS = noWaits(reach)
  let kept: DayPlan['forPeople'] | null = null
  for (let round = 0; round < PEOPLE_ROUNDS; round++) {
    const sections = sectionsFor(tables, stageEnds, heldMps, waitS)
    // As it is told: a climb that the motor cannot hold is come to at speed, not braked for.
    const judged = day.drive(onCourse(race, reach, namedMps(reach.count, sections)))
    if (kept === null || isBetterVerdict(judged.verdict, kept.verdict)) kept = { ...judged, sections }
    const missJ = judged.verdict.lackJ
    if (missJ <= 0 && missJ > -PEOPLE_CLOSE_J) break
    tables.targetJ += missJ + SPARE_J
    raiseFloor(tables, missJ + SPARE_J)
  }
  return kept as DayPlan['forPeople']
}

/** Tables of a day along a forecast at an ordinary speed; null where the day drives nothing. */
export function someTables({
  race,
  dayIndex,
  opening,
  targetCharge,
}: DayTask): { tables: DayTables; reach: Reach } | null {
  const path = planSun(race.days[dayIndex])
  const speedMps = ordinarySpeeds(race)
  const base = forecastDay(race, dayIndex, opening, speedMps, path)
  const along = { race, dayIndex, base, path, targetCharge }
  const reach = reachOf(along)
  if (reach.count <= 0) return null
  const now = { speedMps, forecast: base, verdict: judge(race, base, targetCharge) }
  const drive = () => now
  const { tables } = settledTables({ race, dayIndex, targetCharge, path, reach, drive }, now)
  return { tables, reach }
}

function raiseFloor(tables: DayTables, byJ: number): void {
  for (let i = 0; i < tables.floorJ.length; i++) tables.floorJ[i] += byJ
}
