import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { operatingPoint } from '../../server/engine/operating-point.ts'
import { prepareTracker, sharedTracker, type Tracker } from '../../server/engine/tracker.ts'
import { inputForOutputW, trackerOutputW } from '../../server/engine/tracker-output.ts'

const channel = (name: string, change: Partial<Tracker> = {}): Tracker =>
  prepareTracker({
    name,
    window: { inputMinV: 20, inputMaxV: 90, inputMaxA: 8, outputMinV: 0, outputMaxV: 130, outputMaxA: 9, maxW: 300 },
    losses: { standingW: 1, switchingFraction: 0.004, conductionOhm: 0.2, rectifierV: 0.5 },
    trackingEfficiency: 0.99,
    ...change,
  })

// A string by hand: current 8·(1 − (V/80)^8) A.
const powerAtV = (volts: number): number => volts * 8 * Math.max(1 - (volts / 80) ** 8, 0)
const BEST_V = 80 * (1 / 9) ** (1 / 8)
const BEST = { V: BEST_V, W: powerAtV(BEST_V) }
const around = { packV: 110, airC: 25, isMoving: false }

describe('trackers side by side on one string', () => {
  const pair = sharedTracker('pair', [channel('a'), channel('b')])

  it('each lose at their own share, standing losses once each, worked by hand', () => {
    // 240 W at 60 V: 2 A each. 1 + 0.004·2·120 + 0.2·4 = 2.76 W of 120 W; the rest over 1 + 0.5/120. Twice.
    expect(trackerOutputW(pair, 240, 60, 120)).toBeCloseTo((2 * (120 - 2.76)) / (1 + 0.5 / 120), 9)
    // One alone: 4 A, 1 + 0.004·4·120 + 0.2·16 = 6.12 W of 240 W.
    expect(trackerOutputW(channel('a'), 240, 60, 120)).toBeCloseTo((240 - 6.12) / (1 + 0.5 / 120), 9)
  })

  it('carry twice the power and current of one', () => {
    expect(operatingPoint(pair, BEST, around, powerAtV)).toMatchObject({ limit: null, inputW: BEST.W * 0.99 })
    expect(operatingPoint(channel('a'), BEST, around, powerAtV)).toMatchObject({ limit: 'power' })
  })

  it('a dead one leaves its share to the other', () => {
    const lame = sharedTracker('lame', [channel('a', { isDead: true }), channel('b')])
    expect(trackerOutputW(lame, 240, 60, 120)).toBeCloseTo(trackerOutputW(channel('b'), 240, 60, 120), 12)
    const point = operatingPoint(lame, BEST, around, powerAtV)
    expect(point.limit).toBe('power')
    expect(point.inputW).toBeCloseTo(300, 6)
  })

  it('all dead, as one dead alone, give nothing and deny all', () => {
    const dead = [channel('a', { isDead: true }), channel('b', { isDead: true })]
    for (const own of [sharedTracker('none', dead), dead[0]])
      expect(operatingPoint(own, BEST, around, powerAtV)).toMatchObject({
        inputW: 0,
        limit: 'dead',
        deniedW: BEST.W * 0.99,
      })
  })

  it('work where their windows meet', () => {
    const window = { ...channel('a').window, inputMinV: 65, inputMaxV: 85, outputMinV: 100 }
    const unlike = sharedTracker('unlike', [channel('a'), channel('b', { window })])
    expect(unlike.window).toMatchObject({ inputMinV: 65, inputMaxV: 85, outputMinV: 100, outputMaxV: 130, maxW: 600 })
    expect(operatingPoint(unlike, BEST, around, powerAtV)).toMatchObject({ limit: 'input-low', inputV: 65 })
    const above = { ...channel('a').window, inputMinV: 95, inputMaxV: 99 }
    expect(() => sharedTracker('apart', [channel('a'), channel('b', { window: above })])).toThrowError(/inputMaxV/)
  })

  it('give no more than they take, and the input is found back', () => {
    const between = (min: number, max: number) => fc.double({ min, max, noNaN: true })
    const losses = fc.record({
      standingW: between(0, 3),
      switchingFraction: between(0, 0.03),
      conductionOhm: between(0, 0.3),
      rectifierV: between(0, 1.2),
    })
    fc.assert(
      fc.property(fc.array(losses, { minLength: 2, maxLength: 4 }), between(1, 900), between(20, 90), (all, W, V) => {
        const own = sharedTracker(
          'own',
          all.map((terms, i) => channel(`${i}`, { losses: terms })),
        )
        const outputW = trackerOutputW(own, W, V, 110)
        expect(outputW).toBeGreaterThanOrEqual(0)
        expect(outputW).toBeLessThanOrEqual(W)
        const isBelowPeak = all.every((t) => 2 * t.conductionOhm * (W / all.length / V) < V - t.switchingFraction * 110)
        if (outputW > 1 && isBelowPeak && all.every((t) => W / all.length > 2 * t.standingW + 1))
          expect(inputForOutputW(own, outputW, V, 110) / W).toBeCloseTo(1, 6)
      }),
      { numRuns: 1000 },
    )
  })
})
