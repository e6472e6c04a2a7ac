import type { DayBudget } from '../../server/documents/budget.ts'
import type { Axis } from './axis.ts'

type Gate = DayBudget['gates'][number]

/** A gate’s name and charge in the lane above the plot. */
export interface LaneLabel {
  gate: Gate
  /** Place of the gate on the axis, and of its label, middle-anchored. [px] */
  gateX: number
  x: number
  tier: number
}

export interface Lane {
  labels: LaneLabel[]
  tiers: number
}

export const TIER_PX = 36
const GAP = 6
/** How far a label may stand from its gate before it takes another row. [px] */
const MOST_SHIFT = 16

/** Gates that the lane names: departures are left to the grey blocks of their stops. */
export const laneGates = (day: DayBudget): Gate[] => day.gates.filter((gate) => gate.kind !== 'depart')

/** Labels set side by side, in as few rows as keep them readable and near their gates. */
export function gateLane(day: DayBudget, axis: Axis, room: number, widthOf: (gate: Gate) => number): Lane {
  const ends: number[] = []
  const labels = laneGates(day).map((gate) => {
    const half = widthOf(gate) / 2
    const gateX = axis.x(Date.parse(gate.at))
    const wanted = Math.min(Math.max(gateX, half), room - half)
    for (let tier = 0; ; tier++) {
      const end = ends[tier] ?? -Infinity
      const x = Math.max(wanted, end + GAP + half)
      if (x - wanted > MOST_SHIFT || x + half > room + 0.5) continue
      ends[tier] = x + half
      return { gate, gateX, x, tier }
    }
  })
  return { labels, tiers: Math.max(1, ends.length) }
}
