import { describe, expect, test } from 'vitest'
import { oneDay } from '../support/some-budget.ts'
import { someSky } from '../support/scenario.ts'

describe('the fastest speed that meets a target', () => {
  const TARGETS = Array.from({ length: 12 }, (_, i) => 80 + i)

  test.each(TARGETS)('leaves not a watt-hour short of %i %, and one km/h more does', (targetPct) => {
    const at = (speeds: unknown) =>
      oneDay((r) => {
        r.race.days[0].targetPct = targetPct
        r.speeds = speeds
      })
    const found = at({ kind: 'meet-target' })
    expect(found.targetMarginWh).toBeGreaterThanOrEqual(0)
    const heldKmh = found.heldKmh ?? Number.NaN
    // Above the road's limit nothing changes any more.
    if (heldKmh < 110) expect(at({ kind: 'constant', speedKmh: heldKmh + 1 }).targetMarginWh).toBeLessThan(0)
  })
})

describe('cloud cover in the document', () => {
  // Kasten & Czeplak 1980: GHI = clear × (1 − 0.75 N^3.4); N = 8, 6 and 4 eighths
  test.each([
    [100, 0.25],
    [75, 0.718],
    [50, 0.929],
  ])('of %i % leaves its share of the clear sky’s light', (cloudPct, share) => {
    const noon = (cloud: number): number => {
      const { series } = oneDay((r) => void (r.sky = someSky(cloud)))
      return series.ghiWm2[series.fromMs.findIndex((ms) => ms >= Date.parse('2026-10-17T12:00:00+02:00'))]
    }
    expect(noon(cloudPct) / noon(0)).toBeCloseTo(share, 3)
  })
})
