import type { DayTables } from '../planner/day-tables.ts'
import { refine, type Refined } from '../planner/refine.ts'
import { type Course, type Members, members } from './members.ts'
import { quantile } from './ranges.ts'
import type { Spreads } from './spread.ts'

/** A plan that touches the floor no more often than promised. */
export interface RobustPlan {
  refined: Refined
  /** How much higher than asked the floor is held at each edge. [J] (pieces + 1) */
  marginJ: Float64Array
  /** Share of fresh members that touch the floor. */
  touches: number
  /** How much later than the plan without margins it arrives. [S] */
  costS: number
}

const ROUNDS = 4
const MEMBERS = 2000

/**
 * Tightens the floor place by place until no more members than promised touch it, and plans anew.
 *
 * The margin at an edge is what the members there fall short of the plan at one common share; that share is found so
 * that the members that touch anywhere are as many as promised, and corrected by fresh members of the new plan.
 *
 * @param lay     lays a drive out for an ensemble
 * @param promise share of members that may touch the floor somewhere, 0..1
 */
export function robustPlan(
  day: DayTables,
  start: Refined,
  lay: (refined: Refined) => Course,
  of: { spreads: Spreads; promise: number; seed: number },
): RobustPlan {
  const { promise } = of
  const allowed = promise - Math.sqrt((promise * (1 - promise)) / MEMBERS)
  let refined = start
  let aimed = allowed
  let best: RobustPlan | null = null
  for (let round = 0; round < ROUNDS; round++) {
    const before = members(lay(refined), of.spreads, MEMBERS, of.seed + 2 * round)
    const marginJ = marginsFor(before, refined.track.energyJ, day.pieces, aimed)
    refined = refine({ ...day, floorJ: day.floorJ.map((J, i) => J + marginJ[i]) }, refined.drive, refined.multiplier)
    const fresh = members(lay(refined), of.spreads, MEMBERS, of.seed + 2 * round + 1)
    const touches = share(fresh)
    const now = { refined, marginJ, touches, costS: endOf(refined) - endOf(start) }
    if (best === null || isBetter(now, best, allowed)) best = now
    if (touches <= allowed && touches > 0.6 * promise) break
    aimed = Math.min(Math.max((aimed * allowed) / Math.max(touches, 1 / MEMBERS), promise / 20), 0.5)
  }
  return best as RobustPlan
}

const endOf = ({ track }: Refined): number => track.atS[track.atS.length - 1]
const share = ({ spareJ, count }: Members): number => spareJ.reduce((sum, J) => sum + (J <= 0 ? 1 : 0), 0) / count

function isBetter(one: RobustPlan, other: RobustPlan, allowed: number): boolean {
  if (one.touches <= allowed !== other.touches <= allowed) return one.touches <= allowed
  return one.touches <= allowed ? one.costS < other.costS : one.touches < other.touches
}

/** Margins at one common share of each edge's members, such that so many members fall below them somewhere. */
function marginsFor(of: Members, plannedJ: Float64Array, pieces: number, promise: number): Float64Array {
  const edges = pieces + 1
  const sorted = Array.from({ length: edges }, (_, i) => {
    const column = new Float64Array(of.count)
    for (let m = 0; m < of.count; m++) column[m] = of.energyJ[m * edges + i] - plannedJ[i]
    return column.sort()
  })
  const at = (share: number): Float64Array =>
    Float64Array.from(sorted, (column) => Math.max(-quantile(column, share), 0))
  let low = 0
  let high = promise
  let margins = at(low)
  for (let n = 0; n < 12; n++) {
    const middle = (low + high) / 2
    const tried = at(middle)
    if (fallsBelow(of, plannedJ, edges, tried) > promise) high = middle
    else {
      low = middle
      margins = tried
    }
  }
  return margins
}

function fallsBelow(of: Members, plannedJ: Float64Array, edges: number, margins: Float64Array): number {
  let fallen = 0
  for (let m = 0; m < of.count; m++)
    for (let i = 1; i < edges; i++)
      if (of.energyJ[m * edges + i] - plannedJ[i] < -margins[i]) {
        fallen++
        break
      }
  return fallen / of.count
}
