import { describe, expect, test } from 'vitest'
import { storedJ } from '../../../server/engine/battery.ts'
import type { DayPlan } from '../../../server/engine/planner/plan-day.ts'
import { planDay } from '../../../server/engine/planner/plan-day.ts'
import { planRace } from '../../../server/engine/planner/plan-race.ts'
import { driveAlong } from '../../../server/engine/planner/simulate.ts'
import { demoDay } from '../../support/demo-race.ts'
import { racedByTheSecond } from './second-by-second.ts'

const saturday = demoDay('2026-10-17')
const { race, opening } = saturday
const FREE = [Number.NaN, Number.NaN, Number.NaN]
const LAST = 2

function drivingMin(plan: DayPlan | null): number {
  if (plan === null) throw new Error('a day has no plan')
  const { spans } = plan.best.forecast.timetable
  return (plan.best.verdict.arrivalMs - (spans.find(({ kind }) => kind === 'drive')?.fromMs ?? 0)) / 60_000
}
const total = (days: { plan: DayPlan | null }[]) => days.reduce((sum, { plan }) => sum + drivingMin(plan), 0)

describe('a race of two days, the night between them free', { timeout: 120_000 }, () => {
  const free = planRace({ race, dayIndex: 1, opening, targetCharge: FREE })

  test('keeps reserve and every closing charge, and opens each day where the one before closed', () => {
    for (const { plan } of free.days) expect(plan?.best.verdict.lackJ).toBeLessThanOrEqual(0)
    const [first, second] = free.days
    expect(second.plan?.best.forecast.openingJ).toBeCloseTo(storedJ(race.car.pack, first.closing?.charge ?? 0), 0)
    expect(free.targets[LAST]).toBeCloseTo(race.car.reserveCharge, 6)
  })

  test('has one price of energy on both sides of the night, within 1.5 %', () => {
    const [first, second] = free.days
    const evening = first.plan?.sPerJ[first.plan.reach.count] ?? Number.NaN
    const morning = second.plan?.sPerJ[0] ?? Number.NaN
    expect(Math.abs(evening / morning - 1)).toBeLessThan(0.015)
  })

  test('is what another simulator finds from the first start through the night to the last close, to 0.1 s and 0.1 Wh', () => {
    const plans = free.days.map(({ plan }) => plan as DayPlan)
    const days = plans.map(({ tables, best, reach }) => ({
      day: tables,
      drive: driveAlong(tables, best.speedMps, reach.first),
      morningJ: tables.start.energyJ - best.forecast.openingJ,
    }))
    racedByTheSecond(days, plans[0].best.forecast.openingJ).forEach(({ endS, duskJ, spareJ }, d) => {
      const { forecast, verdict } = plans[d].best
      const arrivalS = (verdict.arrivalMs - race.days[d + 1].opensMs) / 1000
      expect(Math.abs(endS - arrivalS)).toBeLessThan(0.1)
      expect(Math.abs(duskJ - forecast.closingJ) / 3600).toBeLessThan(0.1)
      expect(spareJ / 3600).toBeGreaterThan(-0.1)
    })
  })

  test('takes no longer than with the night given, whatever is given', () => {
    for (const charge of [0.35, 0.65]) {
      const given = planRace({ race, dayIndex: 1, opening, targetCharge: [Number.NaN, charge, Number.NaN] })
      expect(total(free.days), `${charge}`).toBeLessThan(total(given.days))
    }
  })
})

test('a race of one day is that day', { timeout: 60_000 }, () => {
  const sunday = demoDay('2026-10-18')
  const { days } = planRace({ race, dayIndex: LAST, opening: sunday.opening, targetCharge: [NaN, NaN, 0.3] })
  const alone = planDay({ race, dayIndex: LAST, opening: sunday.opening, targetCharge: 0.3 })
  expect(days.length).toBe(1)
  // Started from other speeds, both settle to within 0.3 s.
  const apartMs = (days[0].plan?.best.verdict.arrivalMs ?? 0) - (alone?.best.verdict.arrivalMs ?? 0)
  expect(Math.abs(apartMs)).toBeLessThan(300)
})

test('what a short day does not reach is driven on the next', { timeout: 120_000 }, () => {
  const drivingToMs = race.days[1].drivingFromMs + 4 * 3_600_000
  const days = race.days.map((day, d) => (d === 1 ? { ...day, drivingToMs } : day))
  const short = planRace({ race: { ...race, days }, dayIndex: 1, opening, targetCharge: [NaN, 0.4, NaN] })
  const [first, second] = short.days
  const reachedM = first.closing?.standing.placeM ?? 0
  expect(reachedM).toBeGreaterThan(race.course.stages[1].fromM + 250_000)
  expect(reachedM).toBeLessThan(race.course.stages[3].toM)
  expect(second.plan?.best.forecast.timetable.spans[0].fromM).toBeCloseTo(reachedM, 3)
})

test('a drive of less than an hour is bound within half a minute', { timeout: 60_000 }, () => {
  const friday = demoDay('2026-10-16')
  const plan = planDay({ race, dayIndex: 0, opening: friday.opening, targetCharge: 0.82 })
  expect(drivingMin(plan)).toBeLessThan(60)
  const withinS = ((plan?.best.verdict.arrivalMs ?? Number.NaN) - (plan?.boundMs ?? Number.NaN)) / 1000
  expect(withinS).toBeGreaterThanOrEqual(0)
  expect(withinS).toBeLessThan(30)
})
