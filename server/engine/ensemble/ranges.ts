import type { DayEffect } from './day-effects.ts'
import type { Course, Members } from './members.ts'
import { members } from './members.ts'
import { CAUSES, type Cause, type Spreads } from './spread.ts'

/** What nine, five and one of ten members reach at least. */
export interface Range {
  p10: number
  p50: number
  p90: number
}

/** A share of sorted values, straight between ranks. */
export function quantile(sorted: ArrayLike<number>, share: number): number {
  const at = share * (sorted.length - 1)
  const i = Math.min(at | 0, sorted.length - 2)
  return sorted.length === 1 ? sorted[0] : sorted[i] + (sorted[i + 1] - sorted[i]) * (at - i)
}

export function rangeOf(values: ArrayLike<number>): Range {
  const sorted = Float64Array.from(values).sort()
  return { p10: quantile(sorted, 0.1), p50: quantile(sorted, 0.5), p90: quantile(sorted, 0.9) }
}

/** Energy over the members as they come to an edge: before the stop that may stand there. [J] */
export function rangeAt(of: Members, pieces: number, edge: number): Range {
  const stops = of.stopEdges.length
  const stop = of.stopEdges.indexOf(edge)
  const values = new Float64Array(of.count)
  for (let m = 0; m < of.count; m++)
    values[m] = stop < 0 ? of.energyJ[m * (pieces + 1) + edge] : of.arriveJ[m * stops + stop]
  return rangeOf(values)
}

/** Share of the members that touch the floor, and the edge at which most of them come lowest; -1 where none touches. */
export function touching(of: Members): { share: number; edge: number } {
  let touched = 0
  const times = new Map<number, number>()
  for (let m = 0; m < of.count; m++) {
    if (of.spareJ[m] > 0) continue
    touched++
    times.set(of.spareEdge[m], (times.get(of.spareEdge[m]) ?? 0) + 1)
  }
  const most = [...times].sort((a, b) => b[1] - a[1])[0]
  return { share: touched / of.count, edge: most?.[0] ?? -1 }
}

/** Variances that sum to less are rounding. [J²] */
const NOTHING_J2 = 1e-3

/** Each cause's share of the spread of the closing balance: its variance alone over all variances alone. */
export function sharesOfSpread(
  course: Course,
  spreads: Spreads,
  count: number,
  seed: number,
): { cause: Cause | DayEffect; share: number }[] {
  const causes = [...CAUSES, ...course.effects]
  const alone = causes.map((cause) => variance(members(course, spreads, count, seed, cause).duskJ))
  const total = alone.reduce((sum, value) => sum + value, 0)
  return causes.map((cause, c) => ({ cause, share: total > NOTHING_J2 ? alone[c] / total : 0 }))
}

function variance(values: Float64Array): number {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length
  return values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / Math.max(values.length - 1, 1)
}
