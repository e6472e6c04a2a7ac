import { storedJ } from '../battery.ts'
import { daySun, type DayForecast, forecastDay, type Opening, type Race } from '../forecast.ts'
import { backTrack, earliestEnd } from './back-track.ts'
import { earliestPossible } from './bound.ts'
import type { DayTables } from './day-tables.ts'
import { type Along, type Reach, reachOf, tablesAlong } from './engine-tables.ts'
import { frontier } from './frontier.ts'
import { holds, isBetterVerdict, judge, type Verdict } from './judge.ts'
import { refine, type Refined } from './refine.ts'
import { driveOf, type Section, sectionsFor } from './sections.ts'
import { settle } from './settle.ts'
import { simulate } from './simulate.ts'

/** A day to plan. */
export interface DayTask {
  race: Race
  dayIndex: number
  opening: Opening
  /** Usable charge wanted when the day closes, 0..1. */
  targetCharge: number
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
  /** The tables along the best plan. */
  tables: DayTables
  /** What a joule more on leaving each piece saves. [s/J] (pieces of the day + 1) */
  sPerJ: Float64Array
  /** No drive of one speed a piece arrives earlier, as the tables have it. [ms] */
  boundMs: number
}

const BIN_S = 60
const SPEED_STEP_MPS = 4 / 3.6
const BOUND_STEP_S = 20
const MOST_ROUNDS = 6
/** Speed of the first forecast, and of pieces that the day does not reach. [Mps] */
const SOME_MPS = 70 / 3.6
/** Aimed at beyond reserve and target, so that the forecast keeps them too. [J] */
const SPARE_J = 720
/** A plan that its forecast misses by less is settled. [J, ms] */
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
  const { race, dayIndex, opening, targetCharge } = task
  const path = daySun(race.days[dayIndex])
  const drive = (speedMps: Float64Array): Judged => {
    const forecast = forecastDay(race, dayIndex, opening, speedMps, path)
    return { speedMps, forecast, verdict: judge(race, forecast, targetCharge) }
  }
  let now = drive(new Float64Array(race.course.pieces.count).fill(SOME_MPS))
  const reach = reachOf({ race, dayIndex, base: now.forecast, path, targetCharge })
  if (reach.count <= 0) return null
  let best: Judged | null = null
  let settled: { tables: DayTables; refined: Refined } | null = null
  for (let round = 0; round < MOST_ROUNDS; round++) {
    const along = { race, dayIndex, base: now.forecast, path, targetCharge }
    const { tables, heldMps } = settledTables(along, reach, now)
    const refined: Refined | null =
      settled === null
        ? fromFrontier(tables)
        : refine(tables, { speedMps: heldMps, waitS: noWaits(reach) }, settled.refined.multiplier)
    if (refined === null) return null
    const before = now.verdict
    now = drive(onCourse(race, reach, refined.drive.speedMps))
    settled = { tables, refined }
    if (best === null || isBetterVerdict(now.verdict, best.verdict)) best = now
    const isSame = Math.abs(now.verdict.arrivalMs - before.arrivalMs) < SETTLED_MS
    if (isSame && holds(now.verdict) && now.verdict.lackJ > -SETTLED_J - SPARE_J) break
  }
  if (best === null || settled === null) return null
  const along = { race, dayIndex, base: best.forecast, path, targetCharge }
  const { tables, heldMps } = settledTables(along, reach, best)
  const { sPerJ } = settled.refined
  const endS = (best.verdict.arrivalMs - race.days[dayIndex].opensMs) / 1000
  return {
    best,
    forPeople: peoplePlan(along, reach, tables, heldMps, drive),
    reach,
    tables,
    sPerJ,
    boundMs: race.days[dayIndex].opensMs + 1000 * earliestPossible(tables, sPerJ, endS, BOUND_STEP_S),
  }
}

const noWaits = (reach: Reach): Float64Array => new Float64Array(reach.count + 1)

function settledTables(along: Along, reach: Reach, now: Judged): { tables: DayTables; heldMps: Float64Array } {
  const tables = tablesAlong(along, reach)
  const heldMps = tables.fastestMps.map((fastest, i) => Math.min(now.speedMps[reach.first + i], fastest))
  settle(tables, along, reach, now.forecast, heldMps)
  tables.targetJ += SPARE_J
  raiseFloor(tables, SPARE_J)
  return { tables, heldMps }
}

/** The end of the fastest constant speed that holds; the day's where none does. [S] */
function someEndS(tables: DayTables): number {
  const waitS = new Float64Array(tables.pieces + 1)
  for (let kmh = 130; kmh >= 30; kmh -= 2) {
    const { shortJ, lateS, atS } = simulate(tables, {
      speedMps: tables.fastestMps.map((fastest) => Math.min(fastest, kmh / 3.6)),
      waitS,
    })
    if (shortJ <= 0 && lateS <= 0) return atS[tables.pieces]
  }
  return tables.latestS
}

function raiseFloor(tables: DayTables, byJ: number): void {
  for (let i = 0; i < tables.floorJ.length; i++) tables.floorJ[i] += byJ
}

function fromFrontier(tables: DayTables): Refined | null {
  const found = frontier(tables, BIN_S, SPEED_STEP_MPS, someEndS(tables))
  const endS = earliestEnd(tables, found)
  return endS === Number.POSITIVE_INFINITY ? null : refine(tables, backTrack(tables, found, endS))
}

function onCourse(race: Race, reach: Reach, speedMps: Float64Array): Float64Array {
  const all = new Float64Array(race.course.pieces.count).fill(SOME_MPS)
  all.set(speedMps, reach.first)
  return all
}

const PEOPLE_ROUNDS = 3

/** Whole speeds in sections, slowed until the forecast itself finds that they hold. */
function peoplePlan(
  along: Along,
  reach: Reach,
  tables: DayTables,
  bestMps: Float64Array,
  drive: (speedMps: Float64Array) => Judged,
): DayPlan['forPeople'] {
  const { race, dayIndex } = along
  const stageEnds = race.course.stages
    .slice(0, race.days[dayIndex].lastStage + 1)
    .map(({ endPiece }) => endPiece - reach.first)
    .filter((end) => end > 0)
  const waitS = noWaits(reach)
  const aimed = { ...tables, floorJ: tables.floorJ.slice() }
  let kept: DayPlan['forPeople'] | null = null
  for (let round = 0; round < PEOPLE_ROUNDS; round++) {
    const sections = sectionsFor(aimed, stageEnds, bestMps, waitS)
    const judged = drive(onCourse(race, reach, driveOf(aimed, sections, waitS).speedMps))
    if (kept === null || isBetterVerdict(judged.verdict, kept.verdict)) kept = { ...judged, sections }
    const missJ = judged.verdict.lackJ
    if (missJ <= 0) break
    aimed.targetJ += missJ + SPARE_J
    raiseFloor(aimed, missJ + SPARE_J)
  }
  return kept as DayPlan['forPeople']
}

/** Energy stored at a charge, for those who read a plan. [J] */
export const wantedJ = ({ race, targetCharge }: DayTask): number => storedJ(race.car.pack, targetCharge)
