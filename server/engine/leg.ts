import type { DrivenRoad } from './driven-road.ts'
import { pass } from './moves.ts'
import type { Moves, Passage } from './moves.ts'

/** A drive from rest to rest. */
export interface Leg {
  /** Where the car comes to rest: the wanted place, or how far the time lets it come. */
  reachedM: number
  durationS: number
}

/** A drive laid out piece by piece; edges have one entry more than there are pieces. Speeds squared. [m²/s²] */
interface Plan {
  first: number
  count: number
  edgesM: Float64Array
  /** Most with which an edge may be passed so that what lies ahead can still be kept. */
  most: Float64Array
  /** Speed at the edge, and time from the start. */
  squared: Float64Array
  atS: Float64Array
  firstMove: Int32Array
}

/** A drive that misses its time by less than this has made it. [S] */
const ONE_MOMENT_S = 0.001

/** A place of rest is found to this. [M] */
const PLACE_M = 1e-6

/**
 * The fastest drive to rest that keeps to held speeds and bounds; one that the time cuts off brakes so
 * that it stands when the time ends.
 *
 * A lower speed ahead is reached by the edge of its piece. Speed squared is linear in distance under one
 * acceleration, so that each part is in closed form.
 *
 * @param leg  from and to where, on which piece it starts, and the time it may take [M, S]; how fast the car comes,
 *   where it does not start from rest: no faster than is wanted there, and so that it can stop [Mps]
 * @param out  the drive's moves are added to it
 * @source forward and backward passes under bounds of acceleration (common practice)
 */
export function driveLeg(
  road: DrivenRoad,
  leg: { fromM: number; toM: number; piece: number; withinS: number; speedMps?: number },
  out: Moves,
): Leg {
  const plan = layPlan(road, leg)
  for (let k = 0; k < plan.count; k++) passNext(road, plan, k, out)
  const wholeS = plan.atS[plan.count]
  return wholeS <= leg.withinS + ONE_MOMENT_S
    ? { reachedM: leg.toM, durationS: wholeS }
    : cutOff(road, plan, leg.withinS, out)
}

/** Edges, and backwards from the end the most with which each may be passed. */
function layPlan(road: DrivenRoad, leg: { fromM: number; toM: number; piece: number; speedMps?: number }): Plan {
  const { fromM, count: pieces } = road.course.pieces
  let end = leg.piece + 1
  while (end < pieces && fromM[end] < leg.toM) end++
  const count = end - leg.piece
  const column = (): Float64Array => new Float64Array(count + 1)
  const plan = {
    first: leg.piece,
    count,
    edgesM: column(),
    most: column(),
    squared: column(),
    atS: column(),
    firstMove: new Int32Array(count + 1),
  }
  plan.edgesM[0] = leg.fromM
  for (let k = 1; k < count; k++) plan.edgesM[k] = fromM[leg.piece + k]
  plan.edgesM[count] = leg.toM
  for (let k = count - 1; k > 0; k--) {
    const capMps = Math.min(road.capMps[leg.piece + k - 1], road.capMps[leg.piece + k])
    plan.most[k] = Math.min(capMps * capMps, stoppable(road, plan, k, plan.edgesM[k + 1], plan.most[k + 1]))
  }
  const comesMps = Math.min(leg.speedMps ?? 0, road.capMps[leg.piece])
  plan.squared[0] = Math.min(comesMps * comesMps, stoppable(road, plan, 0, plan.edgesM[1], plan.most[1]))
  return plan
}

/** Speed at an edge, squared, from which the brakes bring the car to a speed at a place of the piece behind it. */
const stoppable = (road: DrivenRoad, plan: Plan, k: number, placeM: number, squared: number): number =>
  squared +
  (2 * road.bounds.brakingMps2 * (placeM - plan.edgesM[k])) / Math.cos(road.course.pieces.gradeRad[plan.first + k])

// Scratch of one drive, which is never re-entered.
const passage: Passage = { piece: 0, fromM: 0, toM: 0, entry: 0, exitMost: 0 }

function passNext(road: DrivenRoad, plan: Plan, k: number, out: Moves): void {
  plan.firstMove[k] = out.count
  passage.piece = plan.first + k
  passage.fromM = plan.edgesM[k]
  passage.toM = plan.edgesM[k + 1]
  passage.entry = plan.squared[k]
  passage.exitMost = plan.most[k + 1]
  const passed = pass(road, passage, out)
  plan.squared[k + 1] = passed.squared
  plan.atS[k + 1] = plan.atS[k] + passed.timeS
}

/** The farthest place at which the car can stand when its time ends. */
function cutOff(road: DrivenRoad, plan: Plan, withinS: number, out: Moves): Leg {
  const brake = new Float64Array(plan.count + 1)
  const standsInS = (k: number, placeM: number): number => standAt(road, plan, { k, placeM, brake }, null)
  let low = 0
  let high = plan.count - 1
  while (low < high) {
    const middle = (low + high) >> 1
    if (standsInS(middle, plan.edgesM[middle + 1]) > withinS) high = middle
    else low = middle + 1
  }
  let nearM = plan.edgesM[low]
  let farM = plan.edgesM[low + 1]
  while (farM - nearM > PLACE_M) {
    const middleM = (nearM + farM) / 2
    if (standsInS(low, middleM) > withinS) farM = middleM
    else nearM = middleM
  }
  const k = nearM > plan.edgesM[low] ? low : low - 1
  if (k < 0) {
    out.count = plan.firstMove[0]
    return { reachedM: plan.edgesM[0], durationS: 0 }
  }
  return { reachedM: nearM, durationS: standAt(road, plan, { k, placeM: nearM, brake }, out) }
}

/**
 * Time in which the car comes to rest at a place: as in the whole drive until it must brake.
 *
 * @param at   a place on piece `k` of the plan, and room for the speeds at the edges before it
 * @param out  null when only the time is asked; else the drive's moves from there on are replaced
 */
function standAt(
  road: DrivenRoad,
  plan: Plan,
  at: { k: number; placeM: number; brake: Float64Array },
  out: Moves | null,
): number {
  const { placeM, brake } = at
  let from = at.k
  let most = stoppable(road, plan, from, placeM, 0)
  while (from > 0 && most < plan.squared[from]) {
    brake[from] = most
    from--
    most = stoppable(road, plan, from, plan.edgesM[from + 1], most)
  }
  if (out !== null) out.count = plan.firstMove[from]
  let squared = plan.squared[from]
  let timeS = plan.atS[from]
  for (let i = from; i <= at.k; i++) {
    passage.piece = plan.first + i
    passage.fromM = plan.edgesM[i]
    passage.toM = i === at.k ? placeM : plan.edgesM[i + 1]
    passage.entry = squared
    passage.exitMost = i === at.k ? 0 : Math.min(plan.most[i + 1], brake[i + 1])
    const passed = pass(road, passage, out)
    ;({ squared } = passed)
    timeS += passed.timeS
  }
  return timeS
}
