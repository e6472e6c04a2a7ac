import type { Race } from '../forecast.ts'
import { dayUntil } from '../until-there.ts'
import { type DayTables, rowAt } from './day-tables.ts'
import { energyAt, type Frontier, frontier } from './frontier.ts'
import { holds } from './judge.ts'
import { bestDay, type DayPlan, type DayTask, planDay, someTables } from './plan-day.ts'

/** A day that ends where its hours, reserve and target let the car come. */
export interface Furthest {
  /** The race with the day's road cut there. */
  race: Race
  /** The piece in front of which the car is parked. */
  endPiece: number
  plan: DayPlan
}

const BIN_S = 60
const SPEED_STEP_MPS = 4 / 3.6
const MOST_TRIES = 12

/**
 * The plan that comes furthest in a day's hours with reserve, stops and target kept: the car is parked there, and what
 * the evening brings is the sun of that place.
 *
 * The frontier says about how far; then the day is planned to the edges of pieces around until one holds and the next
 * does not. Right to a piece.
 *
 * @param nameOf  what a place in front of a piece is called
 * @returns null where not even the first piece can be driven so
 */
export function furthestDay(task: DayTask, nameOf: (endPiece: number) => string): Furthest | null {
  const some = someTables(task)
  if (some === null) return null
  const { first, count } = some.reach
  let { startMps } = task
  const cut = (edge: number): DayTask => ({
    ...task,
    startMps,
    race: dayUntil(task.race, task.dayIndex, first + edge, nameOf(first + edge)),
  })
  const isReached = (edge: number): boolean => {
    const best = bestDay(cut(edge))?.found.best
    if (best === undefined || !holds(best.verdict) || !best.verdict.isFinished) return false
    // Tables along a plan that nearly is the one wanted are truer than along any other speed.
    startMps = best.speedMps
    return true
  }
  const edge = lastThatHolds(isReached, furthestEdge(some.tables), count)
  if (edge === 0) return null
  const at = cut(edge)
  const plan = planDay(at)
  return plan === null ? null : { race: at.race, endPiece: first + edge, plan }
}

/** The last of the edges 1 to `last` that holds, looked for around a guess; 0 where none does. */
function lastThatHolds(isReached: (edge: number) => boolean, guess: number, last: number): number {
  let low = 0
  let high = last + 1
  let step = 1
  let edge = Math.min(Math.max(guess, 1), last)
  for (let n = 0; n < MOST_TRIES && high - low > 1; n++) {
    if (isReached(edge)) low = edge
    else high = edge
    if (low > 0 && high <= last) edge = (low + high) >> 1
    else {
      edge = low > 0 ? Math.min(low + step, high - 1) : Math.max(high - step, 1)
      step *= 2
    }
  }
  return low
}

/** The last edge at which the day may end in time with floor and target kept, by the tables; 0 where there is none. */
export function furthestEdge(day: DayTables): number {
  const found = frontier(day, BIN_S, SPEED_STEP_MPS, Number.POSITIVE_INFINITY)
  for (let layer = found.legs.length; layer > 0; layer--) {
    const { stop, piece } = found.legs[layer - 1]
    if (stop < 0 && mayEnd(day, found, layer, piece + 1)) return piece + 1
  }
  return 0
}

function mayEnd(day: DayTables, found: Frontier, layer: number, edge: number): boolean {
  const { knotS, knotJ, bins, fromS, stepS } = found
  const closes = (J: number, atS: number): boolean =>
    J >= day.floorJ[edge] && Math.min(day.pack.ceilingJ, J + rowAt(day.duskGainJ, 0, day.clock, atS)) >= day.targetJ
  if (knotS[layer] <= day.latestS && closes(knotJ[layer], knotS[layer])) return true
  for (let k = 0; k < bins; k++) {
    const atS = fromS + k * stepS
    if (atS <= day.latestS && closes(energyAt(found, layer, atS), atS)) return true
  }
  return false
}
