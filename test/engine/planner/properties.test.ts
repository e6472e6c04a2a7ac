import { describe, expect, it } from 'vitest'
import type { Race } from '../../../server/engine/forecast.ts'
import { forecastDay } from '../../../server/engine/forecast.ts'
import { bestDrive } from '../../../server/engine/planner/best-drive.ts'
import type { DayTables } from '../../../server/engine/planner/day-tables.ts'
import { holds, judge } from '../../../server/engine/planner/judge.ts'
import { bestDay, type DayTask, planDay } from '../../../server/engine/planner/plan-day.ts'
import { demoDay } from '../../support/demo-race.ts'
import { clearDayW, cloudyDay, uniform } from './cloudy-day.ts'

const WH = 3600
/** A refined drive is settled to about this. [S] */
const SETTLED_S = 0.3

const endOf = (day: DayTables): number => bestDrive(day)?.track.atS[day.pieces] ?? Number.POSITIVE_INFINITY
const withSun = (day: DayTables, sun: (W: number, atS: number) => number): DayTables => ({
  ...day,
  harvestW: day.harvestW.map((W, at) => sun(W, day.clock.from + (at % day.clock.count) * day.clock.step)),
})

/** What makes a day easier: no plan of it may arrive later. */
const EASIER: [string, (day: DayTables) => DayTables][] = [
  ['more sun', (day) => withSun(day, (W) => 1.02 * W)],
  ['thinner cloud', (day) => withSun(day, (W, atS) => W + 0.15 * Math.max(clearDayW(atS) - W, 0))],
  ['more energy at the start', (day) => ({ ...day, start: { ...day.start, energyJ: day.start.energyJ + 50 * WH } })],
  [
    'less drag',
    (day) => ({
      ...day,
      loadW: day.loadW.map((W, at) => W - 0.002 * (day.speeds.from + (at % day.speeds.count) * day.speeds.step) ** 3),
    }),
  ],
  ['a lower target', (day) => ({ ...day, targetJ: day.targetJ - 50 * WH })],
  ['a lower reserve', (day) => ({ ...day, floorJ: day.floorJ.map((J) => J - 50 * WH) })],
  [
    'more at its stops',
    (day) => ({ ...day, stops: day.stops.map((s) => ({ ...s, gainJ: s.gainJ.map((J) => J + 36e3) })) }),
  ],
  ['higher limits', (day) => ({ ...day, fastestMps: day.fastestMps.map((v) => 1.04 * v) })],
]

describe.each([2, 5, 8, 13])('random day %i', { timeout: 60_000 }, (seed) => {
  const cloudy = cloudyDay(seed, seed % 2 === 0)
  const motion = { massKg: 260, perGained: 1.05, perLost: 0.45 }
  const day: DayTables = { ...cloudy, kinetic: seed % 4 === 0 ? motion : cloudy.kinetic }
  const plainS = endOf(day)

  it.each(EASIER)('is not driven later with %s', (_name, easier) => {
    expect(plainS).toBeLessThan(Number.POSITIVE_INFINITY)
    expect(endOf(easier(day))).toBeLessThan(plainS + SETTLED_S)
  })

  it('is driven earlier by much with much more', () => {
    const much = EASIER.slice(0, 4).reduce((of, [, easier]) => easier(of), day)
    expect(endOf(much)).toBeLessThan(plainS - 60)
  })

  it('is driven at the limit everywhere with ample energy', () => {
    const start = { ...day.start, energyJ: 40_000 * WH }
    const made = bestDrive({ ...day, start, pack: { ...day.pack, ceilingJ: 40_000 * WH } })
    made?.drive.speedMps.forEach((v, i) => expect(v).toBeCloseTo(day.fastestMps[i], 6))
    expect(made).not.toBeNull()
  })
})

/** The demo's Sunday with another car, charge and target. */
function drawn(seed: number): DayTask {
  const next = uniform(seed)
  const between = (low: number, high: number): number => low + (high - low) * next()
  const { race, dayIndex, opening } = demoDay('2026-10-18')
  const { load } = race.car
  const car = {
    ...race.car,
    load: { ...load, massKg: load.massKg * between(0.9, 1.1), dragAreaM2: load.dragAreaM2 * between(0.85, 1.1) },
  }
  const charge = between(0.75, 1)
  return { race: { ...race, car }, dayIndex, opening: { ...opening, charge }, targetCharge: between(0.12, 0.35) }
}
const arrivalS = (task: DayTask): number => (bestDay(task)?.found.best.verdict.arrivalMs ?? Number.NaN) / 1000
const withLoad = (task: DayTask, change: (load: Race['car']['load']) => Race['car']['load']): DayTask => ({
  ...task,
  race: { ...task.race, car: { ...task.race.car, load: change(task.race.car.load) } },
})

describe.each([1, 3])('a whole plan of random car and charge %i, by the forecast', { timeout: 120_000 }, (seed) => {
  const task = drawn(seed)
  const { race, dayIndex, opening, targetCharge } = task

  it('holds, is not beaten by a constant speed, and is not later with less drag or reserve', () => {
    const plan = planDay(task)
    expect(plan).not.toBeNull()
    const { best, forPeople, boundMs } = plan!
    for (const { verdict } of [best, forPeople]) expect(holds(verdict) && verdict.isFinished).toBe(true)
    expect(boundMs).toBeLessThanOrEqual(best.verdict.arrivalMs)
    let held = 0
    for (let kmh = 50; kmh <= 100; kmh += 5) {
      const speedMps = new Float64Array(race.course.pieces.count).fill(kmh / 3.6)
      const verdict = judge(race, forecastDay(race, dayIndex, opening, speedMps), targetCharge)
      if (!holds(verdict) || !verdict.isFinished) continue
      held++
      expect(verdict.arrivalMs).toBeGreaterThan(best.verdict.arrivalMs)
    }
    expect(held).toBeGreaterThan(1)
    const endS = best.verdict.arrivalMs / 1000
    const slick = withLoad(task, (load) => ({ ...load, dragAreaM2: 0.97 * load.dragAreaM2 }))
    expect(arrivalS(slick)).toBeLessThan(endS - 10)
    const lower = { ...race.car, reserveCharge: race.car.reserveCharge - 0.03 }
    expect(arrivalS({ ...task, race: { ...race, car: lower } })).toBeLessThan(endS + 1)
  })
})
