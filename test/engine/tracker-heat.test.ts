import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { caseTemperatureC, deratedShare, operatingPoint } from '../../server/engine/operating-point.ts'
import { type Derating, prepareTracker, type Tracker } from '../../server/engine/tracker.ts'
import { trackerOutputW } from '../../server/engine/tracker-output.ts'

/** Flat to 65 °C, a quarter left from 85 °C; common practice, no source. */
const HEAT: Derating = { fullToC: 65, leastFromC: 85, leastShare: 0.25, parkedCPerW: 2.5, movingCPerW: 1 }

const tracker: Tracker = prepareTracker({
  name: 'bow',
  window: {
    inputMinV: 20,
    inputMaxV: 90,
    inputMaxA: 20,
    outputMinV: 0,
    outputMaxV: 130,
    outputMaxA: 20,
    maxW: 400,
  },
  losses: { standingW: 10, switchingFraction: 0, conductionOhm: 0, rectifierV: 0 },
  trackingEfficiency: 1,
  derating: HEAT,
})

// A string by hand: current 8·(1 − (V/80)^8) A.
const powerAtV = (volts: number): number => volts * 8 * Math.max(1 - (volts / 80) ** 8, 0)
const BEST_V = 80 * (1 / 9) ** (1 / 8)
const BEST = { V: BEST_V, W: powerAtV(BEST_V) }
const at = (airC: number, isMoving: boolean) => ({ packV: 110, airC, isMoving })

describe('heat', () => {
  it.each([
    [20, 1],
    [65, 1],
    [75, 0.625],
    [85, 0.25],
    [120, 0.25],
  ])('a case at %f °C leaves %f of full power, worked by hand', (caseC, share) => {
    expect(deratedShare(HEAT, caseC)).toBeCloseTo(share, 12)
  })

  it('a case that loses 12 W is 30 K over the air standing, 12 K moving', () => {
    expect(caseTemperatureC(HEAT, 12, 35, false)).toBe(65)
    expect(caseTemperatureC(HEAT, 12, 35, true)).toBe(47)
  })

  it('ten watts of loss at 50 °C of air derate a standing tracker to 250 W, a moving one not at all', () => {
    // 50 + 10·2.5 = 75 °C: 0.625 of 400 W, on the side of the string's open circuit.
    const standing = operatingPoint(tracker, BEST, at(50, false), powerAtV)
    expect(standing.limit).toBe('derated')
    expect(standing.inputW).toBeCloseTo(250, 6)
    expect(standing.inputV).toBeGreaterThan(BEST_V)
    expect(standing.inputW + standing.deniedW).toBeCloseTo(BEST.W, 9)
    const moving = operatingPoint(
      { ...tracker, window: { ...tracker.window, maxW: 600 } },
      BEST,
      at(50, true),
      powerAtV,
    )
    expect(moving).toMatchObject({ limit: null, inputW: BEST.W })
  })

  it('where losses grow with power, power and case settle on one another', () => {
    const own = { ...tracker, losses: { ...tracker.losses, standingW: 2, conductionOhm: 0.5 } }
    const { inputW, inputV, limit } = operatingPoint(own, BEST, at(52, false), powerAtV)
    expect(limit).toBe('derated')
    const caseC = 52 + 2.5 * (inputW - trackerOutputW(own, inputW, inputV, 110))
    expect(inputW).toBeCloseTo(400 * (1 - (0.75 * (caseC - 65)) / 20), 4)
  })

  it('hotter air never gives more, airflow never less, and no case sits above what its power allows', () => {
    const between = (min: number, max: number) => fc.integer({ min: min * 100, max: max * 100 }).map((n) => n / 100)
    const own = { ...tracker, losses: { standingW: 3, switchingFraction: 0.01, conductionOhm: 0.2, rectifierV: 0.4 } }
    let derated = 0
    fc.assert(
      fc.property(between(-10, 80), between(0, 30), between(0.05, 1), (airC, more, share) => {
        const best = { V: BEST.V, W: BEST.W * share }
        const own_ = (volts: number): number => powerAtV(volts) * share
        const standing = operatingPoint(own, best, at(airC, false), own_)
        const hotter = operatingPoint(own, best, at(airC + more, false), own_)
        const moving = operatingPoint(own, best, at(airC, true), own_)
        expect(hotter.inputW).toBeLessThanOrEqual(standing.inputW + 1e-6)
        expect(moving.inputW).toBeGreaterThanOrEqual(standing.inputW - 1e-6)
        const lossW = standing.inputW - trackerOutputW(own, standing.inputW, standing.inputV, 110)
        expect(standing.inputW).toBeLessThanOrEqual(400 * deratedShare(HEAT, airC + 2.5 * lossW) + 1e-9)
        if (standing.limit === 'derated') derated++
      }),
      { numRuns: 500 },
    )
    expect(derated).toBeGreaterThan(50)
  })
})

it.each([
  ['tracker.derating.leastFromC', { ...HEAT, leastFromC: 65 }],
  ['tracker.derating.leastShare', { ...HEAT, leastShare: 1.1 }],
  ['tracker.derating.parkedCPerW', { ...HEAT, parkedCPerW: -1 }],
  ['tracker.derating.fullToC', { ...HEAT, fullToC: Number.NaN }],
])('a wrong %s is refused by name', (field, derating) => {
  expect(() => prepareTracker({ ...tracker, derating })).toThrowError(expect.objectContaining({ field }))
})
