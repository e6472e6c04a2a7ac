import { describe, expect, it } from 'vitest'
import type { Below } from '../../../server/engine/planner/below.ts'
import { behindPiece } from '../../../server/engine/planner/bound-piece.ts'
import { type DayTables, loadAt, pieceMps, pieceS, rowAt, storedW } from '../../../server/engine/planner/day-tables.ts'
import { uniform } from './cloudy-day.ts'
import { smallDay } from './small-day.ts'

const PRICE = 1 / 1300

/** A day under a sun that jumps by so much every so often, with loads that are hollow again and again by so much. */
function jumpy(
  seed: number,
  { swingW, stepS, hollowW }: { swingW: number; stepS: number; hollowW: number },
): DayTables {
  const day = smallDay(seed, { pieces: 2, hasExtra: seed % 3 === 0 })
  const next = uniform(900 + seed)
  const clock = { from: day.clock.from, step: stepS, count: Math.ceil(24_000 / stepS) }
  const harvestW = Float64Array.from({ length: day.pieces * clock.count }, () => 600 + swingW * (next() - 0.5))
  const { from, step, count } = day.speeds
  const loadW = day.loadW.map((W, at) => W + hollowW * Math.sin(from + (at % count) * step))
  return { ...day, clock, harvestW, loadW, pack: { ...day.pack, coulombic: 0.9 } }
}

/** What stands before the piece: straight between nodes so far apart, as it comes or convex. */
function before(seed: number, day: DayTables, cellS: number): Below {
  const next = uniform(40 + seed)
  const count = 2 + Math.floor(next() * 8)
  const atS = Float64Array.from({ length: count }, (_, j) => day.start.atS + 900 + j * cellS * (0.6 + 0.4 * next()))
  atS.sort()
  const middleS = (atS[0] + atS[count - 1]) / 2
  const bend = 10 ** (-5 + 2 * next())
  const value = atS.map((s) => bend * (s - middleS) ** 2 + 0.3 * next() - 0.9 * (s - middleS))
  return { atS, value, steepest: -10 }
}

const valueAt = ({ atS, value }: Below, s: number): number => {
  let j = 1
  while (j < atS.length - 1 && atS[j] < s) j++
  return value[j - 1] + ((value[j] - value[j - 1]) * (s - atS[j - 1])) / (atS[j] - atS[j - 1])
}

/** Priced energy of a piece that is driven in a time from an instant on. [s] */
function pricedS(day: DayTables, piece: number, fromS: number, timeS: number): number {
  const load = loadAt(day, piece, pieceMps(day, piece, timeS), { W: 0, slope: 0 })
  const sunW = rowAt(day.harvestW, piece * day.clock.count, day.clock, fromS + timeS / 2)
  return -PRICE * storedW(day.pack, sunW - load.W) * timeS
}

/** The least that what is behind the piece lies under any of many drives over it, and the median over its instants. */
function gaps(day: DayTables, from: Below, stepS: number, seed: number): { leastS: number; middleS: number } {
  const piece = 0
  const shortestS = pieceS(day, piece, day.fastestMps[piece])
  const longestS = pieceS(day, piece, Math.min(day.slowestMps, day.fastestMps[piece]))
  const latestS = from.atS[from.atS.length - 1] + longestS
  const spacing = { nearS: Number.NaN, stepS, widestS: stepS }
  const to = behindPiece(day, spacing, from, { piece, price: PRICE, latestS })
  const next = uniform(seed)
  const all: number[] = []
  for (let n = 0; n < 40; n++) {
    const reachS = to.atS[0] + (latestS - to.atS[0]) * next()
    let least = Number.POSITIVE_INFINITY
    for (let m = 0; m <= 400; m++) {
      const timeS = shortestS + ((longestS - shortestS) * m) / 400
      const leaveS = reachS - timeS
      if (leaveS < from.atS[0] || leaveS > from.atS[from.atS.length - 1]) continue
      least = Math.min(least, valueAt(from, leaveS) + pricedS(day, piece, leaveS, timeS))
    }
    if (least < Number.POSITIVE_INFINITY) all.push(least - valueAt(to, reachS))
  }
  all.sort((a, b) => a - b)
  return { leastS: all[0], middleS: all[all.length >> 1] }
}

describe('what is behind a piece', () => {
  it.each([
    { name: 'a sun that changes slowly', swingW: 200, stepS: 1200, hollowW: 0, mostS: 4 },
    { name: 'a sun that comes and goes', swingW: 1200, stepS: 600, hollowW: 0, mostS: 14 },
    { name: 'a sun that flickers', swingW: 1200, stepS: 60, hollowW: 0, mostS: 130 },
    { name: 'hollow loads', swingW: 0, stepS: 600, hollowW: 20, mostS: 60 },
    { name: 'hollow loads and a sun that comes and goes', swingW: 1200, stepS: 600, hollowW: 20, mostS: 60 },
  ])('lies under every drive over it, and not far: $name', ({ swingW, stepS, hollowW, mostS }) => {
    const middles: number[] = []
    for (let seed = 1; seed <= 120; seed++) {
      const day = jumpy(seed, { swingW, stepS, hollowW })
      const cellS = [30, 90, 250][seed % 3]
      const { leastS, middleS } = gaps(day, before(seed, day, cellS), cellS, seed)
      expect(leastS, `seed ${seed}`).toBeGreaterThan(-1e-9)
      middles.push(middleS)
    }
    middles.sort((a, b) => a - b)
    expect(middles[60]).toBeLessThan(mostS)
  })
})
