import type { DayTables } from './day-tables.ts'

/**
 * By how much the slope of a piece's energy over its time can fall between two entries, fast ones first, per price and
 * slope of what is stored: the integral over speed v of −v·(L″·(1 + extra·v/length) + 2·extra·L′/length) where that is
 * above 0. The load L is a cubic there, so the bracket a parabola.
 */
export function fallsOf(day: DayTables, piece: number, first: number, last: number): Float64Array {
  const { step, from, count } = day.speeds
  const perLength = day.extraS[piece] / day.lengthM[piece]
  const entry = (j: number): number => day.loadW[piece * count + j]
  const fallW = new Float64Array(last - first)
  for (let j = first; j < last; j++) {
    const p1 = entry(j)
    const p2 = entry(j + 1)
    const p0 = j > 0 ? entry(j - 1) : 2 * p1 - p2
    const p3 = j + 2 < count ? entry(j + 2) : 2 * p2 - p1
    const slope0 = (p2 - p0) / 2 / step
    const bend0 = (2 * p0 - 5 * p1 + 4 * p2 - p3) / (step * step)
    const bend1 = (4 * p1 - p0 - 5 * p2 + 2 * p3) / (step * step)
    const low = 1 + perLength * (from + j * step)
    const rise = perLength * step
    const fall = belowZero(
      (bend1 - bend0) * rise + perLength * step * (bend1 - bend0),
      (bend1 - bend0) * low + bend0 * rise + 2 * perLength * step * bend0,
      bend0 * low + 2 * perLength * slope0,
    )
    fallW[last - 1 - j] = fall * step * (from + (j + 1) * step)
  }
  return fallW.some((W) => W > 0) ? fallW : new Float64Array(0)
}

/** Most and least that a load can be: between its entries it passes them by at most an eighth of their range. [W] */
export function loadsOf({ speeds, loadW }: DayTables, piece: number): { mostLoadW: number; leastLoadW: number } {
  let most = 0
  let least = 0
  for (let j = 0; j < speeds.count; j++) {
    const W = loadW[piece * speeds.count + j]
    most = Math.max(most, W)
    least = Math.min(least, W)
  }
  const besideW = (most - least) / 8
  return { mostLoadW: most + besideW, leastLoadW: least - besideW }
}

/** How far a parabola a·u² + b·u + c lies below 0, summed over u from 0 to 1. */
function belowZero(a: number, b: number, c: number): number {
  if (c >= 0 && a + b + c >= 0 && (a <= 0 || (a >= 0 && b >= 0))) return 0
  const root = Math.sqrt(Math.max(b * b - 4 * a * c, 0))
  const q = -0.5 * (b + (b >= 0 ? root : -root))
  const inside = [a === 0 ? Number.NaN : q / a, q === 0 ? Number.NaN : c / q].filter((u) => u > 0 && u < 1)
  const ends = [0, ...inside.sort((x, y) => x - y), 1]
  const sum = (u: number): number => u * (c + u * (b / 2 + (u * a) / 3))
  return ends.slice(1).reduce((total, u, n) => total + Math.max(sum(ends[n]) - sum(u), 0), 0)
}
