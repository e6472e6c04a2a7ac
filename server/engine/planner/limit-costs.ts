import type { DayTables } from './day-tables.ts'
import type { DayPlan } from './plan-day.ts'
import { refine } from './refine.ts'
import { driveAlong } from './simulate.ts'

/** How much earlier the best plan would arrive without one of the things that bind it. */
export interface LimitCost {
  what: 'limits' | 'reserve' | 'target'
  costS: number
}

/** Speeds without posted limits are not looked at beyond this. [Mps] */
const OPEN_ROAD_MPS = 130 / 3.6

/** What limits, reserve and target cost the best plan, by its tables, one at a time. */
export function limitCosts(plan: DayPlan): LimitCost[] {
  const { tables, best, reach } = plan
  const start = driveAlong(tables, best.speedMps, reach.first)
  const endS = (day: DayTables): number => refine(day, start).track.atS[tables.pieces]
  const nowS = endS(tables)
  const without: [LimitCost['what'], DayTables][] = [
    ['limits', { ...tables, fastestMps: plan.heldMps.map((held) => Math.min(held, OPEN_ROAD_MPS)) }],
    ['reserve', { ...tables, floorJ: new Float64Array(tables.pieces + 1) }],
  ]
  const costs = without.map(([what, day]): LimitCost => ({ what, costS: Math.max(nowS - endS(day), 0) }))
  // Without a target the road's end is reached with what the reserve leaves: the price would be that of the floor.
  const free = refine({ ...tables, targetJ: Number.NEGATIVE_INFINITY }, start)
  costs.push({ what: 'target', costS: Math.max(nowS - free.track.atS[tables.pieces], 0) })
  return costs
}
