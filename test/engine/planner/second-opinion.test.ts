import { describe, expect, it } from 'vitest'
import { bestDrive } from '../../../server/engine/planner/best-drive.ts'
import { earliestArrival } from '../../../server/engine/planner/bound-day.ts'
import type { DayTables } from '../../../server/engine/planner/day-tables.ts'
import { cloudyDay } from './cloudy-day.ts'
import { linearArrival } from './linear-programme.ts'

const WH = 3600

/** A cloudy day whose sun stands still: each place keeps what a car at 68 km/h would have met, stops and evening too. */
function stillDay(seed: number, isHard = false): DayTables {
  const day = cloudyDay(seed, isHard)
  const { clock } = day
  const held = (row: Float64Array, s: number): Float64Array => row.map(() => row[Math.round(s / clock.step)])
  const harvestW = day.harvestW.slice()
  for (let i = 0; i < day.pieces; i++) {
    const first = i * clock.count
    harvestW.set(held(harvestW.subarray(first, first + clock.count), (i * 1000) / 19), first)
  }
  const stops = day.stops.map((stop) => ({
    ...stop,
    lengthS: held(stop.lengthS, 0),
    gainJ: held(stop.gainJ, 5 * 3600),
  }))
  return { ...day, harvestW, stops, duskGainJ: held(day.duskGainJ, 8 * 3600), latestS: 24 * 3600 }
}

const touches = (day: DayTables, arrivalJ: Float64Array): number =>
  arrivalJ.filter((J, i) => i > 0 && J < day.floorJ[i] + 100).length

/** Where a pack just fills, a joule less costs more than a joule more saves: the price is any between. */
const NOT_ASKED = Number.POSITIVE_INFINITY

describe('a linear programme of the same day', { timeout: 60_000 }, () => {
  const small = stillDay(3)
  // Over the reserve it holds 550 Wh, and its stops bring 900 Wh each.
  const few: DayTables = {
    ...small,
    pack: { ...small.pack, ceilingJ: 1050 * WH },
    start: { ...small.start, energyJ: 1000 * WH },
    stops: small.stops.map((stop) => ({ ...stop, gainJ: stop.gainJ.map(() => 900 * WH) })),
    targetJ: 700 * WH,
  }
  const binding = [
    { name: 'that rides along its reserve', day: stillDay(1), floors: 5, full: 0, lateS: 0, price: 0.02 },
    { name: 'under hard clouds', day: stillDay(4, true), floors: 0, full: 0, lateS: 0, price: 0.002 },
    { name: 'whose pack is full after a stop', day: few, floors: 1, full: 1, lateS: 0.12, price: NOT_ASKED },
  ]

  it.each(binding)(
    'finds the same arrival and the same prices along a day $name',
    async ({ day, floors, full, lateS, price }) => {
      const made = bestDrive(day)
      expect(made?.track.shortJ).toBeLessThanOrEqual(0)
      const { track, sPerJ } = made!
      expect(touches(day, track.arrivalJ)).toBeGreaterThanOrEqual(floors)
      expect(track.energyJ.filter((J) => J >= day.pack.ceilingJ).length).toBeGreaterThanOrEqual(full)
      const linear = await linearArrival(day, 1 / 3.6)
      const endS = track.atS[day.pieces]
      // A mixture of speeds 1 km/h apart loses up to a third of a second against the speed between them.
      expect(endS - linear.arrivalS).toBeLessThan(lateS)
      expect(endS - linear.arrivalS).toBeGreaterThan(-0.35)
      if (price < NOT_ASKED)
        linear.sPerJ.forEach((s, i) => expect(Math.abs(s / sPerJ[i] - 1), `piece ${i}`).toBeLessThan(price))
      expect(earliestArrival(day, sPerJ, endS, 30)).toBeLessThanOrEqual(linear.arrivalS)
    },
  )

  it('comes to the planner’s arrival as its grid grows finer', async () => {
    const day = stillDay(7)
    const made = bestDrive(day)
    const endS = made?.track.atS[day.pieces] ?? Number.NaN
    const off = [await linearArrival(day, 1 / 3.6), await linearArrival(day, 0.5 / 3.6)].map((of) => of.arrivalS - endS)
    expect(off[1]).toBeLessThan(0.06)
    // Chords under a curve: a quarter at half the step. What is left at no step at all is the planner's own miss.
    expect(Math.abs((4 * off[1] - off[0]) / 3)).toBeLessThan(0.02)
  })
})
