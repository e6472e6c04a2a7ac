import { describe, expect, it } from 'vitest'
import { forecastDay } from '../../../server/engine/forecast.ts'
import { planSun, reachOf } from '../../../server/engine/planner/engine-tables.ts'
import { clearPowerW, sunShare } from '../../../server/engine/planner/passing.ts'
import type { Sky } from '../../../server/engine/sky.ts'
import { demoDay } from '../../support/demo-race.ts'

const { race, dayIndex, opening } = demoDay('2026-10-17')
const path = planSun(race.days[dayIndex])
const speedMps = new Float64Array(race.course.pieces.count).fill(70 / 3.6)

/** The clear sky with so much of its light, driven through with a pack that opens at a charge. */
function shareUnder(sun: number, charge: number): number {
  const places = race.sky.places.map((place) => ({ ...place, light: { kind: 'clear' } as const }))
  const sky: Sky = { ...race.sky, places, change: { sun, headwindMps: 0 } }
  const forecast = forecastDay({ ...race, sky }, dayIndex, { ...opening, charge }, speedMps)
  const reach = reachOf({ race, dayIndex, base: forecast, path, targetCharge: 0.2 })
  const full = { ...race, sky: { ...sky, change: { sun: 1, headwindMps: 0 } } }
  return sunShare(forecast, clearPowerW(full, path, forecast, reach), reach)
}

describe('the share of a clear sky', () => {
  it('is about 1 under one, with an empty pack as with a full one', () => {
    expect(shareUnder(1, 0.5)).toBeGreaterThan(0.95)
    expect(shareUnder(1, 1)).toBeGreaterThan(0.9)
  })

  it('follows the light, whatever the car spends', () => {
    for (const sun of [0.2, 0.4, 0.6]) expect(Math.abs(shareUnder(sun, 0.9) - sun)).toBeLessThan(0.06)
    expect(shareUnder(0, 0.9)).toBeLessThan(0.005)
  })
})
