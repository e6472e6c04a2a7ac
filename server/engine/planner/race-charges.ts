import { chargeAtStoredJ, storedJ } from '../battery.ts'
import { forecastDay, type Opening, type Race } from '../forecast.ts'
import { backTrack, earliestEnd } from './back-track.ts'
import type { DayTables } from './day-tables.ts'
import { descend } from './descent.ts'
import { planSun, type Reach, reachOf, sunAhead, tablesAlong } from './engine-tables.ts'
import { frontier } from './frontier.ts'
import { onCourse, ORDINARY_MPS, ordinarySpeeds } from './ordinary.ts'
import { refine, type Refined } from './refine.ts'
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

/** Closing charges of a race, with the speeds that the days would be driven at by their tables. */
export interface RaceCharges {
  /** By day; a given one as it is; NaN for days before the first. */
  targetCharge: number[]
  /** By day; null where the day is parked or not reached by the tables. [Mps] (pieces of the course) */
  speedMps: (Float64Array | null)[]
}

const BIN_S = 180
const SPEED_STEP_MPS = 14 / 3.6
/** Even closing charges tried between the reserve and full. */
const GRID = 8
/** Share of usable charge that the tables of a day are taken around. */
const SOME_CHARGE = 0.6
const MOST_STEPS = 12
/** The days are left when moving a night's charge promises less. [S] */
const CLOSE_S = 0.2
/** What a joule that reserve or target lacks costs while charges are moved: far beyond any price. [s/J] */
const LACK_S_PER_J = 0.02
/** A price changes about by itself over so much energy. [J] */
const PRICE_SPAN_J = 1e7

/** A day seen from the others: how long it takes from one charge to another, or what a parked car gains. */
type RaceDayCost =
  | {
      reach: Reach
      tables: DayTables
      /** Energy that the morning adds to the opening. [J] */
      morningJ: number
    }
  | { parkedJ: number }

/**
 * Closing charges of the days between with which the days together take least time.
 *
 * The frontier of each day from even opening charges gives its time to every closing charge; the least sum over the
 * days is found over those. From there each free charge moves until energy has one price in the evening and the next
 * morning: the price is the slope of a day's time, so that all charges are bettered together.
 */
export function raceCharges(task: RaceTask): RaceCharges {
  const { race, dayIndex, targetCharge } = task
  const { pack } = race.car
  const costs = race.days.map((_, d) => (d < dayIndex ? { parkedJ: 0 } : costOf(task, d)))
  const found = leastPath(task, costs)
  const { path, refined } = found.isWhole ? evenOut(task, costs, found.path) : { path: found.path, refined: [] }
  return {
    targetCharge: race.days.map((_, d) =>
      d < dayIndex ? Number.NaN : (given(targetCharge, d) ?? chargeAtStoredJ(pack, path[d - dayIndex + 1])),
    ),
    speedMps: race.days.map((_, d) => speedsOf(race, costs[d], refined[d - dayIndex] ?? null)),
  }
}

function given(targetCharge: number[], d: number): number | null {
  const charge = targetCharge[d] ?? Number.NaN
  return Number.isNaN(charge) ? null : charge
}

function speedsOf(race: Race, cost: RaceDayCost, refined: Refined | null): Float64Array | null {
  if ('parkedJ' in cost || refined === null) return null
  return onCourse(race, cost.reach, refined.drive.speedMps)
}

function costOf({ race, opening, targetCharge }: RaceTask, d: number): RaceDayCost {
  const path = planSun(race.days[d])
  const speedMps = ordinarySpeeds(race)
  const base = forecastDay(race, d, { ...opening, standing: standingOn(race, d), charge: SOME_CHARGE }, speedMps, path)
  const along = { race, dayIndex: d, base, path, targetCharge: given(targetCharge, d) ?? SOME_CHARGE }
  const reach = reachOf(along)
  if (reach.count <= 0) return { parkedJ: base.closingJ - base.openingJ }
  const tables = tablesAlong(along, reach, sunAhead(along, reach))
  const held = tables.fastestMps.map((fastest) => Math.min(fastest, ORDINARY_MPS))
  settle(tables, along, reach, base, held)
  return { reach, tables, morningJ: tables.start.energyJ - base.openingJ }
}

/** The start of the first stage that a day may start, or where the last one ended. */
function standingOn({ course, days }: Race, d: number): Opening['standing'] {
  const stage = d === 0 ? 0 : days[d - 1].lastStage + 1
  return { stage, placeM: course.stages[stage]?.fromM ?? course.lengthM, stopLeftS: 0 }
}

/** The tables of a day that opens and closes with given energies. */
function between(cost: Extract<RaceDayCost, { tables: DayTables }>, openJ: number, closeJ: number): DayTables {
  const { tables, morningJ } = cost
  const energyJ = Math.min(openJ + morningJ, tables.pack.ceilingJ)
  return { ...tables, start: { ...tables.start, energyJ }, targetJ: closeJ }
}

/** Driving time of a day from an opening energy to each closing energy; Infinity where it cannot be. [S] */
function dayTimes(cost: RaceDayCost, openJ: number, closeJs: number[]): number[] {
  if ('parkedJ' in cost) return closeJs.map((J) => (J <= openJ + cost.parkedJ ? 0 : Number.POSITIVE_INFINITY))
  const day = between(cost, openJ, 0)
  const found = frontier(day, BIN_S, SPEED_STEP_MPS)
  return closeJs.map((targetJ) => earliestEnd({ ...day, targetJ }, found) - day.start.atS)
}

/** Energies at the opening and at each close with the least sum of times over the grids of the days. */
function leastPath(task: RaceTask, costs: RaceDayCost[]): { path: number[]; isWhole: boolean } {
  const { race, dayIndex, opening, targetCharge } = task
  const { pack, reserveCharge } = race.car
  const last = race.days.length - 1
  const floorJ = storedJ(pack, reserveCharge)
  const ceilingJ = storedJ(pack, 1)
  const grid = Array.from({ length: GRID + 1 }, (_, k) => floorJ + ((ceilingJ - floorJ) * k) / GRID)
  const wanted = (d: number): number[] => {
    const charge = given(targetCharge, d)
    if (charge !== null) return [storedJ(pack, charge)]
    return d === last ? [floorJ] : grid
  }
  const openJ = storedJ(pack, opening.charge)
  let ends: { J: number; totalS: number; path: number[] }[] = [{ J: openJ, totalS: 0, path: [openJ] }]
  for (let d = dayIndex; d <= last; d++) {
    const closes = wanted(d)
    const next = closes.map((J) => ({ J, totalS: Number.POSITIVE_INFINITY, path: [] as number[] }))
    for (const end of ends) {
      if (end.totalS === Number.POSITIVE_INFINITY) continue
      dayTimes(costs[d], end.J, closes).forEach((s, k) => {
        if (end.totalS + s < next[k].totalS)
          next[k] = { J: closes[k], totalS: end.totalS + s, path: [...end.path, closes[k]] }
      })
    }
    ends = next
  }
  const best = ends.reduce((a, b) => (b.totalS < a.totalS ? b : a))
  if (best.path.length > 0) return { path: best.path, isWhole: true }
  const some = Array.from({ length: last - dayIndex + 1 }, (_, i) => wanted(dayIndex + i)[0])
  return { path: [openJ, ...some], isWhole: false }
}

/** Moves the free closing energies until energy has one price on both sides of each night. */
function evenOut(
  { race, dayIndex, targetCharge }: RaceTask,
  costs: RaceDayCost[],
  start: number[],
): { path: number[]; refined: (Refined | null)[] } {
  const { pack, reserveCharge } = race.car
  const free = start.map((_, at) => at).filter((at) => at > 0 && at < start.length - 1 && isFree(at))
  const days = costs.slice(dayIndex)
  const path = start.slice()
  let refined: (Refined | null)[] = days.map(() => null)
  const totalS = (closes: Float64Array, slope: Float64Array): number => {
    free.forEach((at, n) => {
      path[at] = closes[n]
    })
    refined = days.map((cost, i) => refinedDay(cost, path[i], path[i + 1], refined[i]))
    free.forEach((at, n) => {
      slope[n] = eveningPrice(at - 1) - morningPrice(at)
    })
    return days.reduce((sum, cost, i) => sum + spentS(cost, refined[i], path[i], path[i + 1]), 0)
  }
  const fill = (value: number) => new Float64Array(free.length).fill(value)
  const box = { low: fill(storedJ(pack, reserveCharge)), high: fill(storedJ(pack, 1)), scale: fill(0) }
  const closes = Float64Array.from(free, (at) => path[at])
  const slope = fill(0)
  totalS(closes, slope)
  box.scale.fill(Math.max(...free.map((at) => eveningPrice(at - 1)), 1e-6) / PRICE_SPAN_J)
  descend(totalS, closes, box, MOST_STEPS, CLOSE_S)
  totalS(closes, slope)
  return { path, refined }

  function isFree(at: number): boolean {
    return given(targetCharge, dayIndex + at - 1) === null
  }
  function eveningPrice(i: number): number {
    const of = refined[i]
    return of === null ? parkedPrice(i) : of.sPerJ[of.sPerJ.length - 1]
  }
  function morningPrice(i: number): number {
    return refined[i]?.sPerJ[0] ?? parkedPrice(i)
  }
  function parkedPrice(i: number): number {
    return spentS(days[i], null, path[i], path[i + 1]) > 0 ? LACK_S_PER_J : 0
  }
}

/** A day's best drive between two energies by its tables, from the one before. */
function refinedDay(cost: RaceDayCost, openJ: number, closeJ: number, before: Refined | null): Refined | null {
  if ('parkedJ' in cost) return null
  const day = between(cost, openJ, closeJ)
  if (before !== null) return refine(day, before.drive, before.multiplier)
  const found = frontier(day, BIN_S, SPEED_STEP_MPS)
  const endS = earliestEnd(day, found)
  const drive =
    endS === Number.POSITIVE_INFINITY
      ? { speedMps: day.fastestMps.map((mps) => Math.min(mps, ORDINARY_MPS)), waitS: new Float64Array(day.pieces + 1) }
      : backTrack(day, found, endS)
  return refine(day, drive)
}

/** A day's time, and what it lacks at a price beyond any other. [S] */
function spentS(cost: RaceDayCost, of: Refined | null, openJ: number, closeJ: number): number {
  if ('parkedJ' in cost) return LACK_S_PER_J * Math.max(closeJ - openJ - cost.parkedJ, 0)
  if (of === null) return 0
  return of.track.atS[cost.tables.pieces] + LACK_S_PER_J * Math.max(of.track.shortJ, 0)
}
