import { describe, expect, it } from 'vitest'
import { earliestEnd } from '../../../server/engine/planner/back-track.ts'
import { bestDrive } from '../../../server/engine/planner/best-drive.ts'
import type { DayTables } from '../../../server/engine/planner/day-tables.ts'
import { frontier } from '../../../server/engine/planner/frontier.ts'
import { simulate } from '../../../server/engine/planner/simulate.ts'
import { plainEarliestEnd } from '../../bench/planner-plain.mjs'
import { cloudyDay, dayOf, STARTS_S } from './cloudy-day.ts'
import { everyChoice } from './every-choice.ts'
import { type Bind, tightDay } from './small-day.ts'

const WH = 3600
type Search = (day: DayTables, stepS: number, stepMps: number) => number

/** The planner's frontier, and the plain one that the bench takes for a yardstick: one set of checks for both. */
const SEARCHES: [string, Search][] = [
  ['the frontier', (day, stepS, stepMps) => earliestEnd(day, frontier(day, stepS, stepMps))],
  ['the plain search', plainEarliestEnd],
]

/** Flat road, P = 8.94 v + 0.0609 v³, no loss, no evening. */
function flatDay(lengthKm: number, usedWh: number, sunW: (piece: number) => number): DayTables {
  const day = dayOf({
    lengthKm,
    grade: () => 0,
    limitKmh: () => 110,
    stopsKm: [],
    headwindMps: 0,
    fronts: [],
    openingWh: 4000,
    capacityWh: 5000,
    targetWh: 4000 - usedWh,
    reserveWh: 500,
    clearW: () => 0,
    lossPerW: 0,
    clockStepS: 600,
  })
  const { speeds, clock } = day
  return {
    ...day,
    loadW: day.loadW.map((_, at) => {
      const v = speeds.from + (at % speeds.count) * speeds.step
      return 8.94 * v + 0.0609 * v ** 3
    }),
    harvestW: day.harvestW.map((_, at) => sunW(Math.floor(at / clock.count))),
    duskGainJ: new Float64Array(clock.count),
    latestS: STARTS_S + 3600,
  }
}
const usedJ = (v: number, S: number, m: number): number => ((8.94 * v + 0.0609 * v ** 3 - S) * m) / v

describe.each(SEARCHES)('%s', { timeout: 60_000 }, (_name, search) => {
  it.each<Bind>(['target', 'floor', 'ceiling', 'all'])('is not beaten by any choice of grid speeds: %s', (bind) => {
    for (const wants of [{ pieces: 4 }, { pieces: 4, hasStop: true }, { pieces: 4, hasExtra: true }]) {
      for (let seed = 1; seed <= 4; seed++) {
        const day = tightDay(seed, wants, bind)
        const choiceS = everyChoice(day, 24)
        const endS = search({ ...day, latestS: Math.min(day.latestS, choiceS + 60) }, 20, 2 / 3.6)
        expect(endS, `seed ${seed}`).toBeLessThan(choiceS)
        // Nor does it make up energy: the refined and simulated drive ends as early.
        expect(endS).toBeGreaterThan((bestDrive(day)?.track.atS[4] ?? Number.NaN) - 1.5)
      }
    }
  })

  it('holds 80 km/h where that is what the energy is for, and 72.7 and 86.7 under 900 and 200 W', () => {
    const m = 60_000
    const steadyWh = usedJ(80 / 3.6, 300, m) / WH
    const even = search(
      flatDay(60, steadyWh, () => 300),
      10,
      1 / 3.6,
    )
    expect(Math.abs(even - STARTS_S - (m / 80) * 3.6)).toBeLessThan(0.5)
    const [bright, cloudy] = [72.7 / 3.6, 86.7 / 3.6]
    const twoWh = (usedJ(bright, 900, m / 2) + usedJ(cloudy, 200, m / 2)) / WH
    const two = search(
      flatDay(60, twoWh, (piece) => (piece % 2 === 0 ? 900 : 200)),
      10,
      1 / 3.6,
    )
    expect(Math.abs(two - STARTS_S - m / 2 / bright - m / 2 / cloudy)).toBeLessThan(0.5)
  })

  it('drives at the limit where energy is ample, and nowhere where it lacks', () => {
    const ample = flatDay(60, 3000, () => 600)
    expect(search(ample, 60, 4 / 3.6)).toBeCloseTo(STARTS_S + (60 / 110) * 3600, 3)
    expect(
      search(
        flatDay(60, 20, () => 0),
        60,
        4 / 3.6,
      ),
    ).toBe(Number.POSITIVE_INFINITY)
  })

  it('is not later than the best constant speed of a cloudy day, and within 20 s of the best drive', () => {
    const day = cloudyDay(7, false, 300)
    const endS = search(day, 60, 4 / 3.6)
    const bestS = bestDrive(day)?.track.atS[day.pieces] ?? Number.NaN
    expect(Math.abs(endS - bestS)).toBeLessThan(20)
    for (let kmh = 110; kmh >= 30; kmh--) {
      const speedMps = day.fastestMps.map((fastest) => Math.min(fastest, kmh / 3.6))
      const track = simulate(day, { speedMps, waitS: new Float64Array(day.pieces + 1) })
      if (track.shortJ <= 0 && track.lateS <= 0) expect(endS).toBeLessThan(track.atS[day.pieces] + 1)
    }
    const floorJ = day.floorJ.map((J) => J + 200 * WH)
    const dearer = search({ ...day, floorJ, targetJ: day.targetJ + 200 * WH }, 60, 4 / 3.6)
    expect(dearer).toBeGreaterThan(endS)
  })
})
