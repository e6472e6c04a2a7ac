import { describe, expect, it } from 'vitest'
import { earliestArrival } from '../../../server/engine/planner/bound-day.ts'
import { earliestPossible } from '../../../server/engine/planner/bound.ts'
import type { DayTables } from '../../../server/engine/planner/day-tables.ts'
import { refine } from '../../../server/engine/planner/refine.ts'
import { simulate } from '../../../server/engine/planner/simulate.ts'
import { cloudyDay, uniform } from './cloudy-day.ts'
import { everyChoice } from './every-choice.ts'
import { smallDay, type SmallWants, tightDay } from './small-day.ts'

const KINDS: { name: string; wants: SmallWants }[] = [
  { name: 'plain', wants: { pieces: 4 } },
  { name: 'with a stop', wants: { pieces: 4, hasStop: true } },
  { name: 'with a stop that opens late', wants: { pieces: 4, hasStop: true, opensLate: true } },
  { name: 'with a stop at the end', wants: { pieces: 4, stopAtEnd: true } },
  { name: 'with a stop at the end that opens late', wants: { pieces: 3, stopAtEnd: true, opensLate: true } },
  { name: 'with motion', wants: { pieces: 5, hasMotion: true } },
  { name: 'with time and energy on top', wants: { pieces: 4, hasExtra: true, hasMotion: true } },
]

/** The earliest of many drives by chance that hold, some with waits; NaN where none does. */
function earliestByChance(day: DayTables, seed: number, tries: number): number {
  const next = uniform(seed)
  let best = Number.NaN
  for (let n = 0; n < tries; n++) {
    const base = next()
    const own = next()
    const speedMps = day.fastestMps.map((fastest) => {
      const slowest = Math.min(day.slowestMps, fastest)
      return slowest + (fastest - slowest) * Math.min(base + own * (next() - 0.3), 1) ** 0.5
    })
    for (let i = 0; i < day.pieces; i++)
      if (!(speedMps[i] >= 30 / 3.6)) speedMps[i] = Math.min(30 / 3.6, day.fastestMps[i])
    const waitS = new Float64Array(day.pieces + 1)
    if (next() < 0.3) waitS[Math.floor(next() * (day.pieces + 1))] = next() * 3000
    const { shortJ, lateS, atS } = simulate(day, { speedMps, waitS })
    if (shortJ <= 0 && lateS <= 0 && !(atS[day.pieces] >= best)) best = atS[day.pieces]
  }
  return best
}

describe('the bound', { timeout: 120_000 }, () => {
  it.each(KINDS)('is never later than a drive that holds, whatever the prices: $name', ({ wants }) => {
    let checked = 0
    for (let seed = 1; seed <= 20; seed++) {
      const day = smallDay(seed, wants)
      const foundS = earliestByChance(day, seed, 1000)
      if (Number.isNaN(foundS)) continue
      const next = uniform(7000 + seed)
      for (let n = 0; n < 8; n++) {
        const scale = 10 ** (-5 + 3 * next())
        const sPerJ = Float64Array.from({ length: day.pieces + 1 }, () => scale * next())
        const atS = earliestPossible(day, sPerJ, foundS + 600 * next(), [5, 20, 60][n % 3])
        expect(atS, `seed ${seed}`).toBeLessThanOrEqual(foundS + 1e-6)
        checked++
      }
    }
    expect(checked).toBeGreaterThan(60)
  })

  it.each(KINDS)('is never later than the best of three refined drives, at prices near theirs: $name', ({ wants }) => {
    let checked = 0
    for (let seed = 1; seed <= 40; seed += wants.hasMotion === true ? 3 : 1) {
      const day = smallDay(seed, wants)
      const made = [0.3, 0.6, 0.9].map((share) => {
        const speedMps = day.fastestMps.map((fastest) => 30 / 3.6 + share * (fastest - 30 / 3.6))
        return refine(day, { speedMps, waitS: new Float64Array(day.pieces + 1) })
      })
      const held = made.filter(({ track }) => track.shortJ <= 0 && track.lateS <= 0)
      if (held.length === 0) continue
      const foundS = Math.min(...held.map(({ track }) => track.atS[day.pieces]))
      for (const { sPerJ } of made) {
        for (const factor of [0.8, 1, 1.25]) {
          const atS = earliestPossible(
            day,
            sPerJ.map((s) => s * factor),
            foundS + 100,
            5,
          )
          expect(atS, `seed ${seed}`).toBeLessThanOrEqual(foundS + 1e-6)
          checked++
        }
      }
    }
    expect(checked).toBeGreaterThan(60)
  })

  /** A load that is hollow again and again: no tangent of its energy over time lies below it by itself. */
  const hollowDay = (seed: number): DayTables => {
    const day = tightDay(seed, { pieces: 2 }, 'target')
    const { from, step, count } = day.speeds
    return { ...day, loadW: day.loadW.map((W, at) => W + 250 * Math.sin(from + (at % count) * step)) }
  }

  /** A pack that is full while the car moves: what it carries as motion is worth more than the pack could take. */
  const fullDay = (seed: number): DayTables => {
    const day = tightDay(seed, { pieces: 3 }, 'ceiling')
    const ceilingJ = day.start.energyJ + 2000
    return {
      ...day,
      pack: { ...day.pack, ceilingJ },
      floorJ: day.floorJ.map(() => ceilingJ - 90_000),
      targetJ: ceilingJ - 60_000,
      harvestW: day.harvestW.map((W, at) => (at < day.clock.count ? W + 1500 : W)),
      duskGainJ: day.duskGainJ.map(() => 0),
      kinetic: { massKg: 260, perGained: 1.15, perLost: 1 },
    }
  }

  it.each([
    { name: 'over hollow loads', dayOf: hollowDay, grid: 150, rises: false },
    { name: 'where energy grows dearer behind a full pack in motion', dayOf: fullDay, grid: 40, rises: true },
  ])('is never later than any choice of grid speeds $name', ({ dayOf, grid, rises }) => {
    let checked = 0
    for (let seed = 1; seed <= 40; seed++) {
      const day = dayOf(seed)
      const choiceS = everyChoice(day, grid)
      if (choiceS === Number.POSITIVE_INFINITY) continue
      const next = uniform(seed)
      for (let n = 0; n < 12; n++) {
        const sPerJ = new Float64Array(day.pieces + 1).fill(10 ** (-3.7 + 0.7 * next()))
        for (let i = 0; i <= day.pieces; i++) sPerJ[i] *= rises && i === 0 ? next() : 0.5 + next()
        const atS = earliestPossible(day, sPerJ, choiceS + 5, [3, 40, 120][n % 3])
        expect(atS, `seed ${seed}`).toBeLessThanOrEqual(choiceS + 1e-6)
        checked++
      }
    }
    expect(checked).toBeGreaterThan(300)
  })

  it('is never later than constant speeds or a disturbed plan, and tighter with narrower cells', () => {
    for (const seed of [3, 8, 17]) {
      const day = cloudyDay(seed, seed === 8)
      const speedMps = day.fastestMps.map((fastest) => Math.min(fastest, 75 / 3.6))
      const made = refine(day, { speedMps, waitS: new Float64Array(day.pieces + 1) })
      const endS = made.track.atS[day.pieces]
      const [wide, usual, narrow] = [120, 60, 30].map((stepS) => earliestPossible(day, made.sPerJ, endS, stepS))
      expect(narrow).toBeGreaterThan(usual)
      expect(usual).toBeGreaterThan(wide)
      expect(endS - narrow).toBeLessThan(0.5 * (endS - wide))
      const next = uniform(seed)
      let held = 0
      for (let n = 0; n < 600; n++) {
        const other =
          n < 100
            ? day.fastestMps.map((fastest) => Math.min(fastest, (40 + 0.6 * n) / 3.6))
            : made.drive.speedMps.map((v, i) => Math.min(v * (1 + 0.02 * (next() - 0.52)), day.fastestMps[i]))
        const track = simulate(day, { speedMps: other, waitS: made.drive.waitS })
        if (track.shortJ > 0 || track.lateS > 0) continue
        held++
        expect(track.atS[day.pieces]).toBeGreaterThanOrEqual(narrow)
      }
      expect(held).toBeGreaterThan(20)
    }
  })

  it('is about as tight with cells around a drive as with even ones, on a day that wants other prices', () => {
    const day = cloudyDay(197)
    const speedMps = day.fastestMps.map((fastest) => Math.min(fastest, 75 / 3.6))
    const { track, sPerJ } = refine(day, { speedMps, waitS: new Float64Array(day.pieces + 1) })
    const endS = track.atS[day.pieces]
    const [evenS, aroundS] = [undefined, track.atS].map((along) => endS - earliestPossible(day, sPerJ, endS, 40, along))
    expect(aroundS).toBeLessThan(1.25 * evenS)
  })

  it('counts to the arrival, not to the end of a stop that is held there', () => {
    for (const opensLate of [false, true]) {
      const day = smallDay(5, { pieces: 3, stopAtEnd: true, opensLate })
      const speedMps = day.fastestMps.map((fastest) => Math.min(fastest, 60 / 3.6))
      const { atS } = simulate({ ...day, stops: [] }, { speedMps, waitS: new Float64Array(day.pieces + 1) })
      const freeJ = { ...day, start: { ...day.start, energyJ: 10_000_000 } }
      const fastestS = simulate(freeJ, { speedMps: day.fastestMps, waitS: new Float64Array(4) }).atS
      const boundS = earliestArrival(freeJ, new Float64Array(4), atS[3], 20)
      expect(boundS).toBeLessThanOrEqual(
        simulate({ ...freeJ, stops: [] }, { speedMps: day.fastestMps, waitS: new Float64Array(4) }).atS[3] + 1e-3,
      )
      if (!opensLate) expect(boundS + 600).toBeCloseTo(fastestS[3], 3)
    }
  })

  it('looks for other prices where those of the drive leave it far below', () => {
    const day = cloudyDay(6)
    const speedMps = day.fastestMps.map((fastest) => Math.min(fastest, 70 / 3.6))
    const { track, sPerJ } = refine(day, { speedMps, waitS: new Float64Array(day.pieces + 1) })
    const endS = track.atS[day.pieces]
    expect(endS - earliestPossible(day, sPerJ, endS, 60)).toBeGreaterThan(1000)
    const boundS = earliestArrival(day, sPerJ, endS, 60)
    expect(boundS).toBeLessThan(endS)
    expect(endS - boundS).toBeLessThan(700)
  })
})
