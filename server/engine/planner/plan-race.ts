import { chargeAtStoredJ, storedJ } from '../battery.ts'
import { type DayForecast, forecastDay, type Opening, type Race } from '../forecast.ts'
import { standingBefore } from '../until-there.ts'
import { earliestEnd } from './back-track.ts'
import type { DayTables } from './day-tables.ts'
import { planSun, reachOf, tablesAlong } from './engine-tables.ts'
import { frontier } from './frontier.ts'
import { furthestDay } from './furthest.ts'
import { type DayPlan, planDay } from './plan-day.ts'
import { settle } from './settle.ts'

/** What is known of a race's closing charges: given ones, the others are to be found. */
export interface RaceTask {
  race: Race
  /** First day to plan, and how it opens. */
  dayIndex: number
  opening: Opening
  /** Wanted closing charge by day of the race; NaN where it is free. */
  targetCharge: number[]
}

const BIN_S = 120
const SPEED_STEP_MPS = 8 / 3.6
/** Even closing charges tried between the reserve and full. */
const GRID = 8
const SHARPENINGS = 3
const SOME_MPS = 70 / 3.6

/** A day seen from the others: how long it takes from one charge to another, or what a parked car gains. */
type DayCost =
  | {
      tables: DayTables
      /** Energy that the morning adds to the opening. [J] */
      morningJ: number
    }
  | { parkedJ: number }

/**
 * Closing charges of the days between with which the days together take least time.
 *
 * The frontier of each day from even opening charges gives its time to every closing charge; the least sum over the
 * days is found over those, then each free charge is sharpened between its neighbours by a parabola.
 *
 * @returns closing charge by day; a given one as it is; NaN for days before the first
 */
export function closingCharges(task: RaceTask): number[] {
  const { race, dayIndex, targetCharge } = task
  const { pack, reserveCharge } = race.car
  const last = race.days.length - 1
  const costs = race.days.map((_, d) => (d < dayIndex ? { parkedJ: 0 } : costOf(task, d)))
  const floorJ = storedJ(pack, reserveCharge)
  const ceilingJ = storedJ(pack, 1)
  const grid = Array.from({ length: GRID + 1 }, (_, k) => floorJ + ((ceilingJ - floorJ) * k) / GRID)
  const wanted = (d: number): number[] => {
    const given = targetCharge[d] ?? Number.NaN
    if (!Number.isNaN(given)) return [storedJ(pack, given)]
    return d === last ? [floorJ] : grid
  }
  const timeS = (d: number, openJ: number, closeJs: number[]): number[] => dayTimes(costs[d], openJ, closeJs)
  const path = leastPath(dayIndex, last, storedJ(pack, task.opening.charge), wanted, timeS)
  for (let n = 0; n < SHARPENINGS; n++) sharpen(path, task, (ceilingJ - floorJ) / GRID / 2 ** n, timeS)
  return race.days.map((_, d) => (d < dayIndex ? Number.NaN : chargeAtStoredJ(pack, path[d - dayIndex + 1])))
}

function costOf({ race, opening, targetCharge }: RaceTask, d: number): DayCost {
  const path = planSun(race.days[d])
  const standing = standingOn(race, d)
  const charge = 0.6
  const speedMps = new Float64Array(race.course.pieces.count).fill(SOME_MPS)
  const base: DayForecast = forecastDay(race, d, { ...opening, standing, charge }, speedMps, path)
  const along = { race, dayIndex: d, base, path, targetCharge: targetCharge[d] ?? charge }
  const reach = reachOf(along)
  if (reach.count <= 0) return { parkedJ: base.closingJ - base.openingJ }
  const tables = tablesAlong(along, reach)
  const held = tables.fastestMps.map((fastest) => Math.min(fastest, SOME_MPS))
  settle(tables, along, reach, base, held)
  return { tables, morningJ: tables.start.energyJ - base.openingJ }
}

/** The start of the first stage that a day may start, or where the last one ended. */
function standingOn({ course, days }: Race, d: number): Opening['standing'] {
  const stage = d === 0 ? 0 : days[d - 1].lastStage + 1
  return { stage, placeM: course.stages[stage]?.fromM ?? course.lengthM, stopLeftS: 0 }
}

/** Driving time of a day from an opening energy to each closing energy; Infinity where it cannot be. [S] */
function dayTimes(cost: DayCost, openJ: number, closeJs: number[]): number[] {
  if ('parkedJ' in cost) return closeJs.map((J) => (J <= openJ + cost.parkedJ ? 0 : Number.POSITIVE_INFINITY))
  const energyJ = Math.min(openJ + cost.morningJ, cost.tables.pack.ceilingJ)
  const day = { ...cost.tables, start: { ...cost.tables.start, energyJ } }
  const found = frontier(day, BIN_S, SPEED_STEP_MPS)
  return closeJs.map((targetJ) => earliestEnd({ ...day, targetJ }, found) - day.start.atS)
}

type Times = (d: number, openJ: number, closeJs: number[]) => number[]

/** Energies at the opening and at each close with the least sum of times over the grids of the days. */
function leastPath(
  first: number,
  last: number,
  openJ: number,
  wanted: (d: number) => number[],
  times: Times,
): number[] {
  let ends: { J: number; totalS: number; path: number[] }[] = [{ J: openJ, totalS: 0, path: [openJ] }]
  for (let d = first; d <= last; d++) {
    const closes = wanted(d)
    const next = closes.map((J) => ({ J, totalS: Number.POSITIVE_INFINITY, path: [] as number[] }))
    for (const end of ends) {
      if (end.totalS === Number.POSITIVE_INFINITY) continue
      times(d, end.J, closes).forEach((s, k) => {
        if (end.totalS + s < next[k].totalS)
          next[k] = { J: closes[k], totalS: end.totalS + s, path: [...end.path, closes[k]] }
      })
    }
    ends = next
  }
  const best = ends.reduce((a, b) => (b.totalS < a.totalS ? b : a))
  return best.path.length > 0
    ? best.path
    : [openJ, ...Array.from({ length: last - first + 1 }, (_, i) => wanted(first + i)[0])]
}

/** Moves each free closing energy to the lowest point of a parabola through itself and its neighbours. */
function sharpen(path: number[], task: RaceTask, stepJ: number, times: Times): void {
  const { race, dayIndex, targetCharge } = task
  const { pack, reserveCharge } = race.car
  const lowJ = storedJ(pack, reserveCharge)
  const highJ = storedJ(pack, 1)
  for (let at = 1; at < path.length - 1; at++) {
    const d = dayIndex + at - 1
    if (!Number.isNaN(targetCharge[d] ?? Number.NaN)) continue
    const tried = [-1, 0, 1].map((n) => Math.min(Math.max(path[at] + n * stepJ, lowJ), highJ))
    const before = times(d, path[at - 1], tried)
    const sums = tried.map((J, n) => before[n] + times(d + 1, J, [path[at + 1]])[0])
    const bend = sums[0] - 2 * sums[1] + sums[2]
    if (Number.isFinite(bend) && bend > 0) {
      const move = Math.min(Math.max((sums[0] - sums[2]) / (2 * bend), -1), 1)
      path[at] = Math.min(Math.max(path[at] + move * stepJ, lowJ), highJ)
    } else path[at] = tried[sums.indexOf(Math.min(...sums))]
  }
}

/** One day of a planned race. */
export interface RaceDay {
  /** Null where the car is parked all day, or where nothing can be planned any more. */
  plan: DayPlan | null
  isParked: boolean
  /** The race as it was planned: its road ends where the day's hours let the car come. */
  race: Race
  /** How the next day opens; null where the day cannot be planned. */
  closing: Opening | null
}

/**
 * Plans of all days in turn, each from where the one before closes. A day whose stages the hours do not let finish
 * ends where they let the car come, and the next one goes on from there.
 */
export function planRace(task: RaceTask): { targets: number[]; days: RaceDay[] } {
  const { race, dayIndex } = task
  const targets = closingCharges(task)
  const days: RaceDay[] = []
  let opening: Opening | null = task.opening
  for (let d = dayIndex; d < race.days.length; d++) {
    const day: RaceDay =
      opening === null ? { plan: null, isParked: false, race, closing: null } : planNext(race, d, opening, targets[d])
    days.push(day)
    opening = day.closing
  }
  return { targets, days }
}

function planNext(race: Race, dayIndex: number, opening: Opening, targetCharge: number): RaceDay {
  if (opening.standing.stage > race.days[dayIndex].lastStage) {
    const speedMps = new Float64Array(race.course.pieces.count).fill(SOME_MPS)
    return { plan: null, isParked: true, race, closing: forecastDay(race, dayIndex, opening, speedMps).closing }
  }
  const task = { race, dayIndex, opening, targetCharge }
  const plan = planDay(task)
  if (plan?.best.verdict.isFinished === true)
    return { plan, isParked: false, race, closing: plan.best.forecast.closing }
  const furthest = furthestDay(task, () => 'Camp')
  if (furthest === null) return { plan: null, isParked: false, race, closing: null }
  const standing = standingBefore(race, furthest.endPiece)
  const closing = { ...furthest.plan.best.forecast.closing, standing }
  return { plan: furthest.plan, isParked: false, race: furthest.race, closing }
}
