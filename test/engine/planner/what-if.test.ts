import { describe, expect, test } from 'vitest'
import { storedJ } from '../../../server/engine/battery.ts'
import type { RoadLoad } from '../../../server/engine/road.ts'
import { bestDay, type DayTask } from '../../../server/engine/planner/plan-day.ts'
import { type Change, changedTables, quickBase, quickWhatIf } from '../../../server/engine/planner/what-if.ts'
import { demoDay } from '../../support/demo-race.ts'

const NOTHING: Change = { sun: 1, dragArea: 1, rolling: 1, massKg: 0, headwindMps: 0, openingCharge: 0, stopS: 0 }
const { race, dayIndex, opening, targetCharge } = demoDay('2026-10-17')
const task: DayTask = { race, dayIndex, opening, targetCharge: targetCharge ?? race.car.reserveCharge }
const found = quickBase(task)
if (found === null) throw new Error('the demo has no plan')
const base = found
const arrivalMs = (of: DayTask): number => bestDay(of)?.found.best.verdict.arrivalMs ?? Number.NaN
const plannedMs = arrivalMs(task)

const withLoad = (change: Partial<RoadLoad>): DayTask => ({
  ...task,
  race: { ...race, car: { ...race.car, load: { ...race.car.load, ...change } } },
})
const { load } = race.car

describe('a quick answer', { timeout: 60_000 }, () => {
  test('without any change is the base', () => {
    const { laterS, lacksJ } = quickWhatIf(base, NOTHING)
    expect(Math.abs(laterS)).toBeLessThan(0.5)
    expect(lacksJ).toBe(0)
  })

  test('begins with what the morning would bring in that sun', () => {
    const { openingJ } = base.forecast
    const startJ = (sun: number): number => changedTables(base, { ...NOTHING, sun }).start.energyJ
    const morningJ = base.tables.start.energyJ - openingJ
    expect(morningJ).toBeGreaterThan(100_000)
    expect(startJ(1)).toBeCloseTo(openingJ + morningJ, 3)
    expect(startJ(0.5)).toBeCloseTo(openingJ + morningJ / 2, 3)
    expect(startJ(0)).toBeCloseTo(openingJ, 3)
  })

  // The other side of each is a whole plan of the changed car or day, which knows nothing of the tables of the base.
  test.each<[string, Partial<Change>, DayTask]>([
    ['more drag', { dragArea: 1.05 }, withLoad({ dragAreaM2: load.dragAreaM2 * 1.05 })],
    [
      'less rolling',
      { rolling: 0.9 },
      withLoad({ rollingCoefficient: load.rollingCoefficient * 0.9, rollingPerMps: load.rollingPerMps * 0.9 }),
    ],
    ['more mass', { massKg: 20 }, withLoad({ massKg: load.massKg + 20 })],
    ['less charge', { openingCharge: -0.02 }, { ...task, opening: { ...opening, charge: opening.charge - 0.02 } }],
    ['more wanted at the close', { targetCharge: 0.45 }, { ...task, targetCharge: 0.45 }],
    [
      'longer stops',
      { stopS: 480 },
      {
        ...task,
        race: {
          ...race,
          stages: race.stages.map((stage) => ({
            ...stage,
            stop: stage.stop && { ...stage.stop, lengthS: stage.stop.lengthS + 480 },
          })),
        },
      },
    ],
  ])('to %s is within 2 % of a whole plan', (_name, change, changed) => {
    const { laterS } = quickWhatIf(base, { ...NOTHING, ...change })
    const wholeS = (arrivalMs(changed) - plannedMs) / 1000
    expect(Math.abs(wholeS)).toBeGreaterThan(100)
    expect(Math.abs(laterS / wholeS - 1)).toBeLessThan(0.02)
  })

  test('is later with less sun, more wind or a dead tracker, the more the later', () => {
    const later = (change: Partial<Change>): number => quickWhatIf(base, { ...NOTHING, ...change }).laterS
    expect(later({ sun: 0.95 })).toBeGreaterThan(60)
    expect(later({ sun: 0.9 })).toBeGreaterThan(later({ sun: 0.95 }))
    expect(later({ sun: 1.05 })).toBeLessThan(-60)
    expect(later({ headwindMps: 1 })).toBeGreaterThan(60)
    expect(later({ headwindMps: 2 })).toBeGreaterThan(later({ headwindMps: 1 }))
    expect(later({ trackerOff: 2 })).toBeGreaterThan(60)
  })

  test('takes less sun off the road, the stops and the evening alike', () => {
    const { tables } = base
    const less = changedTables(base, { ...NOTHING, sun: 0.9 })
    const shares = [
      ...[...tables.harvestW].map((W, i) => [W, less.harvestW[i]]),
      ...tables.stops.flatMap(({ gainJ }, s) => [...gainJ].map((J, k) => [J, less.stops[s].gainJ[k]])),
      ...[...tables.duskGainJ].map((J, k) => [J, less.duskGainJ[k]]),
    ].filter(([before]) => before > 1)
    expect(shares.length).toBeGreaterThan(1000)
    for (const [before, behind] of shares) expect(behind / before).toBeCloseTo(0.9, 9)
    expect(Math.max(...tables.duskGainJ)).toBeGreaterThan(100 * 3600)
  })

  test('a joule at the start is worth its price: 0.2 % less charge against the price of energy there, to 0.3 %', () => {
    const { openingCharge, openingJ } = base.forecast
    const charge = openingCharge * 0.998
    const { laterS } = quickWhatIf(base, { ...NOTHING, openingCharge: charge - openingCharge })
    const lessJ = openingJ - storedJ(race.car.pack, charge)
    expect(laterS).toBeGreaterThan(5)
    expect(Math.abs(laterS / (lessJ * base.refined.sPerJ[0]) - 1)).toBeLessThan(0.003)
  })

  test('says what is missing where no speeds near those of the base hold', () => {
    const { laterS, closingJ, lacksJ } = quickWhatIf(base, { ...NOTHING, targetCharge: 1 })
    expect(laterS).toBeNaN()
    expect(closingJ).toBeNaN()
    expect(lacksJ).toBeGreaterThan(0)
  })
})
