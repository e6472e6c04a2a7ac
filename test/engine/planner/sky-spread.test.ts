import { describe, expect, it } from 'vitest'
import { skySpread } from '../../../server/engine/ensemble/spread.ts'

const HOUR_S = 3600

describe('spread of a sky forecast by its lead time', () => {
  // Common practice, no source: under broken cloud some 10 % an hour ahead, 25 to 30 % a day ahead.
  it('is as commonly found under broken cloud', () => {
    expect(skySpread(HOUR_S, 0.5)).toBeGreaterThan(0.09)
    expect(skySpread(HOUR_S, 0.5)).toBeLessThan(0.14)
    expect(skySpread(24 * HOUR_S, 0.5)).toBeGreaterThan(0.25)
    expect(skySpread(24 * HOUR_S, 0.5)).toBeLessThan(0.3)
  })

  it('grows with the lead time and levels off', () => {
    const hours = [0, 1, 3, 6, 12, 24, 72]
    const spreads = hours.map((h) => skySpread(h * HOUR_S, 0.5))
    for (let i = 1; i < spreads.length; i++) expect(spreads[i]).toBeGreaterThan(spreads[i - 1])
    expect(spreads[6] / spreads[5]).toBeLessThan(1.03)
  })

  it('is far less under a clear or a wholly clouded sky, and takes a stamp from the future as one of now', () => {
    for (const clearness of [0, 1]) expect(skySpread(24 * HOUR_S, clearness)).toBeLessThan(0.07)
    expect(skySpread(-HOUR_S, 0.5)).toBe(skySpread(0, 0.5))
  })
})
