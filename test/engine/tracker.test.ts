import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { newOperatingPoint, operatingPoint } from '../../server/engine/operating-point.ts'
import { prepareTracker, type Tracker, type TrackerLosses } from '../../server/engine/tracker.ts'
import { boostRatio, inputForOutputW, trackerOutput, trackerOutputW } from '../../server/engine/tracker-output.ts'

const NO_LOSS: TrackerLosses = { standingW: 0, switchingFraction: 0, conductionOhm: 0, rectifierV: 0 }

const tracker = prepareTracker({
  name: 'bow',
  window: { inputMinV: 20, inputMaxV: 90, inputMaxA: 8, outputMinV: 70, outputMaxV: 130, outputMaxA: 7, maxW: 450 },
  losses: { standingW: 0.6, switchingFraction: 0.004, conductionOhm: 0.05, rectifierV: 0.4 },
  trackingEfficiency: 0.995,
})
const withLosses = (losses: Partial<TrackerLosses>): Tracker => ({ ...tracker, losses: { ...NO_LOSS, ...losses } })
const withWindow = (window: Partial<Tracker['window']>): Tracker => ({
  ...tracker,
  window: { ...tracker.window, ...window },
})

describe('the boost ratio, Erickson & Maksimović 2001 (from memory)', () => {
  it.each([
    [0.25, 1.333_333],
    [0.5, 2],
    [0.6, 2.5],
  ])('is 1/(1 − D): duty %f gives %f', (duty, ratio) => expect(boostRatio(duty)).toBeCloseTo(ratio, 6))

  it('has no duty of one or below none', () => {
    expect(() => boostRatio(1)).toThrowError(/duty: 1 given/)
    expect(() => boostRatio(-0.1)).toThrowError(/duty: -0.1 given/)
  })

  it.each([
    [0.5, 0.925_93, 1.851_85],
    [0.7, 0.818_18, 2.727_27],
    [0.858_579, 0.5, 3.535_53],
  ])(
    'with a coil of a fiftieth of the load, duty %f leaves an efficiency of %f, a ratio of %f',
    (duty, efficiency, ratio) => {
      // 1/(1 + RL/(D'²R)): 48 V in, a load of 10 Ω, a coil of 0.2 Ω.
      const outputV = 48 * ratio
      const inputA = outputV / 10 / (1 - duty)
      const outputW = trackerOutputW(withLosses({ conductionOhm: 0.2 }), 48 * inputA, 48, outputV)
      expect(outputW / (48 * inputA)).toBeCloseTo(efficiency, 4)
      expect(outputW / (outputV / 10)).toBeCloseTo(outputV, 2)
      expect(outputV / 48).toBeCloseTo(efficiency * boostRatio(duty), 3)
    },
  )
})

describe('the loss polynomial P = a + b·P + c·P² is the four terms at one voltage', () => {
  // a, b, c = 0.004, 0.012, 0.010 of 1000 W; efficiencies worked by hand. 80 V in, 100 V out.
  const polynomial = withLosses({
    standingW: 4,
    switchingFraction: 0.012 * (80 / 100),
    conductionOhm: 0.01 * (80 ** 2 / 1000),
  })
  const efficiencyAt = (share: number): number => trackerOutputW(polynomial, 1000 * share, 80, 100) / (1000 * share)

  it.each([
    [0.05, 0.9075],
    [0.1, 0.947],
    [0.2, 0.966],
    [0.3, 0.971_667],
    [0.5, 0.975],
    [0.75, 0.975_167],
    [1, 0.974],
  ])('at %f of full power %f comes out', (share, efficiency) => expect(efficiencyAt(share)).toBeCloseTo(efficiency, 6))

  it('European and Californian weights give 0.969592 and 0.973068', () => {
    // Weights as commonly printed.
    const weigh = (weights: [number, number][]): number => weights.reduce((sum, [p, w]) => sum + w * efficiencyAt(p), 0)
    const european: [number, number][] = [
      [0.05, 0.03],
      [0.1, 0.06],
      [0.2, 0.13],
      [0.3, 0.1],
      [0.5, 0.48],
      [1, 0.2],
    ]
    const californian: [number, number][] = [
      [0.1, 0.04],
      [0.2, 0.05],
      [0.3, 0.12],
      [0.5, 0.21],
      [0.75, 0.53],
      [1, 0.05],
    ]
    expect(weigh(european)).toBeCloseTo(0.969_592, 6)
    expect(weigh(californian)).toBeCloseTo(0.973_068, 6)
  })
})

describe('what comes out', () => {
  it('is the input less each of the four losses, worked by hand', () => {
    // 240 W at 60 V are 4 A; to 120 V: 0.6 + 0.004·4·120 + 0.05·16 = 3.32 W; the rest over 1 + 0.4/120.
    const { outputW, lossW } = trackerOutput(tracker, 240, 60, 120)
    expect(outputW).toBeCloseTo(236.68 / (1 + 0.4 / 120), 9)
    expect(outputW + lossW).toBe(240)
    expect(0.4 * (outputW / 120) + 3.32).toBeCloseTo(lossW, 9)
  })

  it('is never above the input, its current never above the ideal ratio, and the input is found back', () => {
    const between = (min: number, max: number) => fc.double({ min, max, noNaN: true })
    const losses = fc.record({
      standingW: between(0, 3),
      switchingFraction: between(0, 0.03),
      conductionOhm: between(0, 0.3),
      rectifierV: between(0, 1.2),
    })
    fc.assert(
      fc.property(losses, between(0, 600), between(15, 100), between(0, 0.8), (terms, inputW, inputV, duty) => {
        const own = withLosses(terms)
        const packV = inputV * boostRatio(duty)
        const outputW = trackerOutputW(own, inputW, inputV, packV)
        expect(outputW).toBeGreaterThanOrEqual(0)
        expect(outputW).toBeLessThanOrEqual(inputW)
        expect(outputW / packV).toBeLessThanOrEqual((inputW / inputV) * (1 - duty) * (1 + 1e-12))
        const isBelowPeak = 2 * terms.conductionOhm * (inputW / inputV) < inputV - terms.switchingFraction * packV
        if (outputW > 1e-3 && isBelowPeak) {
          expect(Math.abs(inputForOutputW(own, outputW, inputV, packV) / inputW - 1)).toBeLessThan(1e-6)
        }
      }),
      { numRuns: 3000 },
    )
  })

  it('has a peak above which no input gives more', () => {
    expect(inputForOutputW(withLosses({ conductionOhm: 1 }), 101, 20, 100)).toBe(Infinity)
    expect(inputForOutputW(withLosses({ conductionOhm: 1 }), 99.99, 20, 100)).toBeCloseTo(198, 0)
  })

  it('is nothing where the losses eat it all', () => {
    expect(trackerOutput(tracker, 0.5, 60, 120)).toEqual({ outputW: 0, lossW: 0.5 })
  })
})

// A string by hand: current 6·(1 − (V/80)^8) A. Its best point, by dP/dV = 0: V = 80·(1/9)^(1/8), P = 6·V·8/9.
const currentAtV = (volts: number): number => 6 * Math.max(1 - (volts / 80) ** 8, 0)
const powerAtV = (volts: number): number => volts * currentAtV(volts)
const BEST_V = 80 * (1 / 9) ** (1 / 8)
const BEST = { V: BEST_V, W: (6 * BEST_V * 8) / 9 }
const wantedW = BEST.W * 0.995
const at = (packV: number) => ({ packV, airC: 25, isMoving: false })

describe('where a tracker holds its string', () => {
  it('at its best point inside the window', () => {
    const point = operatingPoint(tracker, BEST, at(110), powerAtV)
    expect(point).toEqual({ inputW: wantedW, inputV: BEST_V, deniedW: 0, limit: null })
  })

  it.each([
    ['input-low', { inputMinV: 70 }, 110, 70],
    ['input-high', { inputMaxV: 50 }, 110, 50],
    ['cannot-step-down', { outputMinV: 40 }, 55, 55],
  ])('at the edge it can take: %s', (limit, window, packV, heldV) => {
    const point = operatingPoint(withWindow(window), BEST, at(packV), powerAtV)
    expect(point.limit).toBe(limit)
    expect(point.inputV).toBe(heldV)
    expect(point.inputW).toBeCloseTo(0.995 * powerAtV(heldV), 9)
    expect(point.inputW + point.deniedW).toBeCloseTo(wantedW, 9)
  })

  it.each([
    ['output-high', {}, 131],
    ['output-low', {}, 69],
    ['cannot-step-down', { inputMinV: 80, outputMinV: 60 }, 75],
  ])('nowhere when the pack is out of reach: %s', (limit, window, packV) => {
    expect(operatingPoint(withWindow(window), BEST, at(packV), powerAtV)).toMatchObject({
      limit,
      inputW: 0,
      deniedW: wantedW,
    })
  })

  it('above its best voltage when the current is too high', () => {
    const point = operatingPoint(withWindow({ inputMaxA: 4 }), BEST, at(110), powerAtV)
    expect(point.limit).toBe('current')
    expect(point.inputW / point.inputV).toBeCloseTo(4, 6)
    // 6·(1 − x⁸)·0.995 = 4, by hand
    expect(point.inputV).toBeCloseTo(80 * (1 - 4 / 6 / 0.995) ** (1 / 8), 6)
  })

  it('above its best voltage when the power is too high, below where there is no room above', () => {
    const up = operatingPoint(withWindow({ maxW: 200 }), BEST, at(110), powerAtV)
    expect(up).toMatchObject({ limit: 'power' })
    expect(up.inputW).toBeCloseTo(200, 6)
    expect(up.inputV).toBeGreaterThan(BEST_V)
    const down = operatingPoint(withWindow({ maxW: 200, inputMaxV: 65 }), BEST, at(110), powerAtV)
    expect(down).toMatchObject({ limit: 'power' })
    expect(down.inputW).toBeCloseTo(200, 6)
    expect(down.inputV).toBeLessThan(65)
  })

  it('so that no more goes out than the output carries', () => {
    const own = withWindow({ outputMaxA: 2 })
    const point = operatingPoint(own, BEST, at(110), powerAtV)
    expect(point.limit).toBe('output-current')
    expect(trackerOutputW(own, point.inputW, point.inputV, 110)).toBeCloseTo(220, 6)
  })

  it('nowhere when no voltage keeps the current down', () => {
    const own = withWindow({ inputMaxA: 2, inputMaxV: 50 })
    expect(operatingPoint(own, BEST, at(110), powerAtV)).toMatchObject({
      limit: 'current',
      inputW: 0,
      deniedW: wantedW,
    })
  })

  it('asleep at night and where the losses would eat the dusk', () => {
    expect(operatingPoint(tracker, { W: 0, V: 0 }, at(110), () => 0)).toMatchObject({
      inputW: 0,
      deniedW: 0,
      limit: 'asleep',
    })
    const dusk = operatingPoint(tracker, { W: 0.5, V: 60 }, at(110), () => 0.5)
    expect(dusk).toMatchObject({ inputW: 0, deniedW: 0.4975, limit: 'asleep' })
  })

  it('never outside the window, never above the best, and what is denied is the rest', () => {
    const between = (min: number, max: number) => fc.double({ min, max, noNaN: true })
    const out = newOperatingPoint()
    const names = new Set<string | null>()
    fc.assert(
      fc.property(
        between(10, 80),
        between(30, 100),
        between(1, 8),
        between(20, 400),
        between(40, 140),
        (low, high, amps, maxW, packV) => {
          const own = withWindow({
            inputMinV: Math.min(low, high - 1),
            inputMaxV: high,
            inputMaxA: amps,
            maxW,
            outputMaxA: 3,
          })
          operatingPoint(own, BEST, at(packV), powerAtV, out)
          names.add(out.limit)
          expect(out.inputW + out.deniedW).toBeCloseTo(wantedW, 9)
          if (out.inputW === 0) return
          expect(out.inputV).toBeGreaterThanOrEqual(own.window.inputMinV)
          expect(out.inputV).toBeLessThanOrEqual(Math.min(own.window.inputMaxV, packV))
          expect(out.inputW / out.inputV).toBeLessThanOrEqual(amps)
          expect(out.inputW).toBeLessThanOrEqual(Math.min(maxW, wantedW))
          expect(out.inputW).toBeLessThanOrEqual(powerAtV(out.inputV))
          expect(trackerOutputW(own, out.inputW, out.inputV, packV) / packV).toBeLessThanOrEqual(3)
        },
      ),
      { numRuns: 2000 },
    )
    expect(names.size).toBeGreaterThanOrEqual(6)
  })
})

it.each([
  ['tracker.window.inputMaxV', { window: { ...tracker.window, inputMaxV: 20 } }],
  ['tracker.window.inputMaxA', { window: { ...tracker.window, inputMaxA: 0 } }],
  ['tracker.window.outputMinV', { window: { ...tracker.window, outputMinV: Number.NaN } }],
  ['tracker.losses.rectifierV', { losses: { ...tracker.losses, rectifierV: -0.1 } }],
  ['tracker.trackingEfficiency', { trackingEfficiency: 1.01 }],
])('a wrong %s is refused by name', (field, change) => {
  expect(() => prepareTracker({ ...tracker, ...change })).toThrowError(expect.objectContaining({ field }))
})

describe('a least rise from input to output', () => {
  it('holds the string that far below the pack', () => {
    const own = withWindow({ outputMinV: 40, leastRiseV: 4 })
    const point = operatingPoint(own, BEST, at(60), powerAtV)
    expect(point).toMatchObject({ limit: 'cannot-step-down', inputV: 56 })
    expect(point.inputW).toBeCloseTo(0.995 * powerAtV(56), 9)
    expect(operatingPoint(own, BEST, at(BEST_V + 4.001), powerAtV).limit).toBeNull()
  })

  it('a pack that rises never takes from a string held at its edge', () => {
    const steps = Array.from({ length: 300 }, (_, i) => 21 + i * 0.3)
    for (const leastRiseV of [0, 3.5]) {
      const own = withWindow({ outputMinV: 0, leastRiseV })
      const taken = steps.map((packV) => operatingPoint(own, BEST, at(packV), powerAtV))
      const held = taken.filter(({ limit }) => limit === 'cannot-step-down')
      expect(held.length).toBeGreaterThan(100)
      held.slice(1).forEach(({ inputW }, i) => expect(inputW).toBeGreaterThanOrEqual(held[i].inputW))
      expect(taken.at(-1)?.limit).toBeNull()
    }
  })
})

// Two hills by hand: 3 A up to 70 V and 8 A up to 30 V, as two panels in unequal light with a bypass.
const hillsAtV = (volts: number): number =>
  volts * Math.max(8 * (1 - (volts / 30) ** 12), 3 * (1 - (volts / 70) ** 12), 0)
const LOW_V = 30 * (1 / 13) ** (1 / 12)
const HIGH_V = 70 * (1 / 13) ** (1 / 12)

describe('a string with two hills', () => {
  const bestBetweenV = (lowV: number, highV: number): number =>
    [lowV, highV, LOW_V, HIGH_V]
      .filter((volts) => volts >= lowV && volts <= highV)
      .reduce((best, volts) => (hillsAtV(volts) > hillsAtV(best) ? volts : best))
  const best = { V: LOW_V, W: hillsAtV(LOW_V), bestBetweenV }

  it('is held on the hill inside the window where that gives more than the edge', () => {
    expect(best.W).toBeGreaterThan(hillsAtV(HIGH_V))
    const point = operatingPoint(withWindow({ inputMinV: 32 }), best, at(110), hillsAtV)
    expect(point.limit).toBe('input-low')
    expect(point.inputV).toBeCloseTo(HIGH_V, 1)
    expect(point.inputW).toBeCloseTo(0.995 * hillsAtV(HIGH_V), 2)
    expect(point.inputW + point.deniedW).toBeCloseTo(0.995 * best.W, 9)
  })

  it('stays at the edge where the window holds no better place', () => {
    const point = operatingPoint(withWindow({ inputMinV: 26, inputMaxV: 35 }), best, at(110), hillsAtV)
    expect(point).toMatchObject({ limit: 'input-low', inputV: 26 })
  })
})
