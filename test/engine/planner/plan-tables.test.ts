import { describe, expect, it } from 'vitest'
import { backTrack, earliestEnd } from '../../../server/engine/planner/back-track.ts'
import { earliestPossible } from '../../../server/engine/planner/bound.ts'
import type { DayTables } from '../../../server/engine/planner/day-tables.ts'
import { frontier } from '../../../server/engine/planner/frontier.ts'
import { lagrangian, newSweep } from '../../../server/engine/planner/lagrangian.ts'
import { refine } from '../../../server/engine/planner/refine.ts'
import { simulate } from '../../../server/engine/planner/simulate.ts'
import { cloudyDay, dayOf, STARTS_S } from './cloudy-day.ts'
import { drivenByTheSecond } from './second-by-second.ts'

const plan = (day: DayTables, stepS = 60, stepKmh = 4) => {
  const found = frontier(day, stepS, stepKmh / 3.6)
  const endS = earliestEnd(day, found)
  return endS === Number.POSITIVE_INFINITY ? null : refine(day, backTrack(day, found, endS))
}
const endOf = (day: DayTables, track: { atS: Float64Array }) => track.atS[day.pieces]

/** Flat road, constant sun, no limits, no losses: 500 km. */
const PLAIN = {
  lengthKm: 500,
  grade: () => 0,
  limitKmh: () => 110,
  stopsKm: [],
  headwindMps: 0,
  fronts: [],
  openingWh: 4000,
  capacityWh: 5000,
  targetWh: 1500,
  reserveWh: 500,
  clearW: () => 800,
  lossPerW: 0,
  clockStepS: 60,
}

describe('the planner on flat road under constant sun', () => {
  const day = { ...dayOf(PLAIN), duskGainJ: new Float64Array(dayOf(PLAIN).clock.count) }

  it('holds one speed, at which energy is used up', () => {
    const made = plan(day)
    expect(made).not.toBeNull()
    const speeds = made?.drive.speedMps ?? new Float64Array()
    const mean = (500_000 / (endOf(day, made!.track) - STARTS_S)) * 3.6
    expect(Math.max(...speeds) * 3.6 - mean).toBeLessThan(0.05)
    expect(mean - Math.min(...speeds) * 3.6).toBeLessThan(0.05)
    // By hand: (30 + (F0 + b v²) v/0.96 − 800 W) × 500 km / v = 2,500 Wh, with F0 = 250·9.80665·0.0035 N, b = ½·1.17·0.1.
    const drawnWh = (v: number) =>
      ((30 + ((250 * 9.80665 * 0.0035 + 0.0585 * v * v) * v) / 0.96 - 800) * (500_000 / v)) / 3600
    let [low, high] = [10, 30]
    for (let i = 0; i < 60; i++) {
      const v = (low + high) / 2
      if (drawnWh(v) > 2500) high = v
      else low = v
    }
    expect(mean).toBeCloseTo(low * 3.6, 1)
  })

  it('is bound from below within a quarter of a minute', () => {
    const made = plan(day)
    const endS = endOf(day, made!.track)
    const earliestS = earliestPossible(day, made!.sPerJ, endS, 20)
    expect(earliestS).toBeLessThanOrEqual(endS)
    expect(endS - earliestS).toBeLessThan(15)
  })
})

describe('the slope of the priced arrival', () => {
  it('is that of small changes', () => {
    // A target that is missed, so that energy has its price everywhere.
    const day = { ...cloudyDay(3), targetJ: 4900 * 3600 }
    const sweep = newSweep(day, new Float64Array(day.pieces + 1))
    sweep.waitS[100] = 120
    sweep.multiplier.fill(1e-6)
    sweep.multiplier[day.pieces + 1] = 1 / 1300
    sweep.stiffness = 7e-9
    const timeS = day.lengthM.map((m, i) => m / Math.min(day.fastestMps[i], (70 + 10 * Math.sin(i)) / 3.6))
    const slope = new Float64Array(day.pieces)
    const scratch = new Float64Array(day.pieces)
    lagrangian(day, sweep, timeS, slope)
    let checked = 0
    for (let i = 0; i < day.pieces; i += 7) {
      const more = timeS.slice()
      const less = timeS.slice()
      more[i] += 1e-4
      less[i] -= 1e-4
      const measured = (lagrangian(day, sweep, more, scratch) - lagrangian(day, sweep, less, scratch)) / 2e-4
      expect(Math.abs(measured - slope[i])).toBeLessThan(1e-6 * (1 + Math.abs(slope[i])))
      checked++
    }
    expect(sweep.price[day.pieces]).toBeGreaterThan(1 / 1300)
    expect(checked).toBeGreaterThan(60)
  })
})

describe('random cloudy days', () => {
  const SEEDS = Array.from({ length: 24 }, (_, i) => i + 1)
  const made = SEEDS.map((seed) => {
    const day = cloudyDay(seed, seed % 4 === 0)
    return { seed, day, result: plan(day) }
  })

  it('gives a drive that holds, not later than the best constant speed', () => {
    let feasible = 0
    for (const { day, result } of made) {
      if (result === null) continue
      feasible++
      expect(result.track.shortJ).toBeLessThanOrEqual(0)
      expect(result.track.lateS).toBeLessThanOrEqual(0)
      for (let kmh = 110; kmh >= 30; kmh--) {
        const speedMps = day.fastestMps.map((fastest) => Math.min(fastest, kmh / 3.6))
        const track = simulate(day, { speedMps, waitS: new Float64Array(day.pieces + 1) })
        if (track.shortJ > 0 || track.lateS > 0) continue
        expect(endOf(day, result.track)).toBeLessThan(endOf(day, track) + 0.5)
      }
    }
    expect(feasible).toBeGreaterThan(18)
  })

  it('agrees with a simulator of its own that goes second by second', () => {
    for (const { day, result } of made) {
      if (result === null) continue
      const judged = drivenByTheSecond(day, result.drive)
      expect(Math.abs(judged.endS - endOf(day, result.track))).toBeLessThan(0.1)
      expect(Math.abs(judged.duskJ - result.track.duskJ) / 3600).toBeLessThan(0.1)
    }
  })

  it('has its bound on the right side, within 0.2 % of the driving time on most days', () => {
    const gaps = made.slice(0, 12).flatMap(({ day, result }) => {
      if (result === null) return []
      const endS = endOf(day, result.track)
      const earliestS = earliestPossible(day, result.sPerJ, endS, 20)
      expect(earliestS).toBeLessThanOrEqual(endS)
      return [(endS - earliestS) / (endS - day.start.atS - 1800 * day.stops.length)]
    })
    gaps.sort((a, b) => a - b)
    expect(gaps[gaps.length >> 1]).toBeLessThan(0.002)
  }, 60_000)
})
