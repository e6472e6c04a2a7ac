import { describe, expect, it } from 'vitest'
import { forecastDay } from '../../../server/engine/forecast.ts'
import { rowAt } from '../../../server/engine/planner/day-tables.ts'
import { isNear, planSun, reachOf, sunAhead, tablesAlong } from '../../../server/engine/planner/engine-tables.ts'
import { demoDay } from '../../support/demo-race.ts'

const { race, opening } = demoDay('2026-10-17')
const dayIndex = 1
const path = planSun(race.days[dayIndex])
const along = (kmh: number) => {
  const speedMps = new Float64Array(race.course.pieces.count).fill(kmh / 3.6)
  return { race, dayIndex, path, targetCharge: 0.3, base: forecastDay(race, dayIndex, opening, speedMps, path) }
}
const usual = along(70)
const reach = reachOf(usual)
const sunAheadOfUsual = sunAhead(usual, reach)

describe('the sun ahead of a day', () => {
  it.each([80, 90])('is that of other speeds too, while they may be driven: %d km/h', (kmh) => {
    const tables = tablesAlong(usual, reach)
    const other = along(kmh)
    const { harvestW, clock } = tablesAlong(other, reach)
    const { passedS } = sunAhead(other, reach)
    const mostW = harvestW.reduce((a, b) => Math.max(a, b))
    let farthestS = 0
    for (let i = 0; i < reach.count && passedS[i] < tables.latestS; i++) {
      const row = i * clock.count
      const W = rowAt(tables.harvestW, row, clock, passedS[i])
      expect(Math.abs(W - rowAt(harvestW, row, clock, passedS[i])) / mostW).toBeLessThan(0.02)
      farthestS = Math.max(farthestS, Math.abs(passedS[i] - sunAheadOfUsual.passedS[i]))
    }
    expect(farthestS).toBeGreaterThan(1500)
  })

  it('is taken anew where a forecast passes half an hour away', () => {
    expect(isNear(sunAheadOfUsual, usual, reach)).toBe(true)
    expect(isNear(sunAheadOfUsual, along(71), reach)).toBe(true)
    expect(isNear(sunAheadOfUsual, along(45), reach)).toBe(false)
  })

  it('is worked out for no later than leads to a wanted arrival', () => {
    const endS = usual.base.timetable.spans.findLast(({ kind }) => kind === 'drive')?.toMs ?? Number.NaN
    const untilS = (endS - race.days[dayIndex].opensMs) / 1000
    const narrow = sunAhead(usual, reach, untilS)
    const { clock, harvestW, passedS } = sunAheadOfUsual
    for (let i = 0; i < reach.count; i++) {
      const row = i * clock.count
      for (const s of [passedS[i] - 300, passedS[i]])
        expect(rowAt(narrow.harvestW, row, clock, s)).toBeCloseTo(rowAt(harvestW, row, clock, s), 0)
    }
  })
})
