import { describe, expect, it } from 'vitest'
import { earliestEnd } from '../../../server/engine/planner/back-track.ts'
import { bestDrive } from '../../../server/engine/planner/best-drive.ts'
import { type DayTables, loadAt } from '../../../server/engine/planner/day-tables.ts'
import { frontier } from '../../../server/engine/planner/frontier.ts'
import { simulate } from '../../../server/engine/planner/simulate.ts'
import { cloudyDay, uniform } from './cloudy-day.ts'
import { smallDay } from './small-day.ts'

const GRID = 22

/** Straight line through a row of the tables. */
function lookUp(row: Float64Array, first: number, day: DayTables, at: number): number {
  const x = Math.min(Math.max((at - day.clock.from) / day.clock.step, 0), day.clock.count - 1.001)
  const i = Math.floor(x)
  return row[first + i] * (i + 1 - x) + row[first + i + 1] * (x - i)
}

/** The earliest end over every choice of one speed of an even grid for each piece; Infinity where none holds. */
function everyChoice(day: DayTables): number {
  const { pack } = day
  const kept = (W: number): number => (W > 0 ? W * pack.coulombic : W) - W * W * pack.lossPerW
  const choices = Array.from(day.fastestMps, (fastest, i) =>
    Array.from({ length: GRID }, (_, g) => {
      const v = day.slowestMps + ((fastest - day.slowestMps) * g) / (GRID - 1)
      return { s: day.lengthM[i] / v + day.extraS[i], W: loadAt(day, i, v, { W: 0, slope: 0 }).W }
    }),
  )
  let best = Number.POSITIVE_INFINITY
  const go = (piece: number, t: number, J: number): void => {
    if (piece > 0 && J < day.floorJ[piece]) return
    let [now, has] = [t, J]
    for (const stop of day.stops) {
      if (stop.beforePiece !== piece) continue
      has = Math.min(has + lookUp(stop.gainJ, 0, day, now), pack.ceilingJ)
      now += lookUp(stop.lengthS, 0, day, now)
    }
    if (now >= best) return
    if (piece === day.pieces) {
      const closes = Math.min(has + lookUp(day.duskGainJ, 0, day, now), pack.ceilingJ)
      if (closes >= day.targetJ && now <= day.latestS) best = now
      return
    }
    for (const { s, W } of choices[piece]) {
      const sunW = lookUp(day.harvestW, piece * day.clock.count, day, now + s / 2)
      go(piece + 1, now + s, Math.min(has + kept(sunW - W) * s - day.extraJ[piece], pack.ceilingJ))
    }
  }
  go(0, day.start.atS, day.start.energyJ)
  return best
}

describe('the best drive', () => {
  it('is not beaten by any choice of grid speeds on small days', () => {
    let compared = 0
    for (let seed = 1; seed <= 30; seed++) {
      const day = smallDay(seed, { pieces: 4, hasStop: seed % 2 === 0, hasExtra: seed % 3 === 0 })
      const choiceS = everyChoice(day)
      const made = bestDrive(day)
      if (choiceS === Number.POSITIVE_INFINITY) continue
      expect(made, `seed ${seed}`).not.toBeNull()
      expect(made?.track.shortJ).toBeLessThanOrEqual(0)
      expect((made?.track.atS[4] ?? Number.NaN) - choiceS, `seed ${seed}`).toBeLessThan(0.5)
      compared++
    }
    expect(compared).toBeGreaterThan(15)
  })

  it('is not bettered by small changes that hold', () => {
    for (const seed of [1, 4, 11]) {
      const day = cloudyDay(seed, seed === 4)
      const made = bestDrive(day)
      const endS = made?.track.atS[day.pieces] ?? Number.NaN
      const next = uniform(seed)
      let held = 0
      for (let n = 0; n < 1500; n++) {
        const size = 10 ** (-4 + 3 * next())
        const [from, to] = [next(), next()].map((share) => Math.floor(share * day.pieces))
        const speedMps = (made?.drive.speedMps ?? new Float64Array()).map((v, i) => {
          const by = n % 2 === 0 ? next() - 0.5 : i === from ? 0.5 : i === to ? -0.5 : 0
          return Math.min(Math.max(v * (1 + size * by), 30 / 3.6), day.fastestMps[i])
        })
        const track = simulate(day, { speedMps, waitS: made?.drive.waitS ?? new Float64Array() })
        if (track.shortJ > 0 || track.lateS > 0) continue
        held++
        expect(track.atS[day.pieces]).toBeGreaterThan(endS - 0.1)
      }
      expect(held).toBeGreaterThan(200)
    }
  })

  it('is never earlier with a higher reserve or target', () => {
    for (const seed of [2, 7, 15]) {
      const day = cloudyDay(seed, true)
      const end = (of: DayTables): number => {
        const made = bestDrive(of)
        return made === null ? Number.POSITIVE_INFINITY : made.track.atS[of.pieces]
      }
      const easyS = end(day)
      expect(end({ ...day, floorJ: day.floorJ.map((J) => J + 360_000) })).toBeGreaterThan(easyS - 0.3)
      expect(end({ ...day, targetJ: day.targetJ + 360_000 })).toBeGreaterThan(easyS - 0.3)
    }
  })
})

describe('the frontier', () => {
  it('never falls in time where the sun outweighs what waiting draws', () => {
    for (const seed of [3, 9]) {
      const day = cloudyDay(seed, true)
      const found = frontier(day, 120, 6 / 3.6)
      let looked = 0
      for (let layer = 0; layer <= found.legs.length; layer += 7) {
        for (let k = 1; k < found.bins; k++) {
          const [before, after] = [k - 1, k].map((b) => found.mostJ[layer * found.bins + b])
          if (before === Number.NEGATIVE_INFINITY || found.fromS + k * found.stepS > 17 * 3600) continue
          if (k > found.lastBin[layer]) continue
          looked++
          expect(after).toBeGreaterThanOrEqual(before - 1e-6)
        }
      }
      expect(looked).toBeGreaterThan(1000)
    }
  })

  it('comes to the best drive as its bins and speeds grow finer', () => {
    for (const seed of [5, 12]) {
      const day = cloudyDay(seed, true)
      const bestS = bestDrive(day)?.track.atS[day.pieces] ?? Number.NaN
      const off = [8, 4, 2, 1].map((n) => Math.abs(earliestEnd(day, frontier(day, 30 * n, (0.75 * n) / 3.6)) - bestS))
      expect(off[3]).toBeLessThan(10)
      for (let n = 1; n < 4; n++) expect(off[n]).toBeLessThan(off[n - 1])
    }
  })
})
