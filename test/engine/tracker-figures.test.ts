import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  figuresOf,
  takenShare,
  thinnedSteps,
  weightedEfficiency,
  WEIGHTS,
} from '../../server/engine/tracker-figures.ts'
import { LIMITS, prepareTracker } from '../../server/engine/tracker.ts'

describe('weighted efficiency', () => {
  // a, b, c = 0.004, 0.012, 0.010 of 1000 W at 80 V in, 100 V out; weighed by hand.
  const tracker = prepareTracker({
    name: 'bow',
    window: {
      inputMinV: 0,
      inputMaxV: 200,
      inputMaxA: 50,
      outputMinV: 0,
      outputMaxV: 200,
      outputMaxA: 50,
      maxW: 1000,
    },
    losses: { standingW: 4, switchingFraction: 0.0096, conductionOhm: 0.064, rectifierV: 0 },
    trackingEfficiency: 1,
  })
  it.each([
    ['european', 0.969_592],
    ['californian', 0.973_068],
  ] as const)('%s weights give %f', (name, expected) => {
    expect(weightedEfficiency(tracker, WEIGHTS[name], { W: 1000, inputV: 80, packV: 100 })).toBeCloseTo(expected, 6)
  })

  it('weights add up to one', () => {
    for (const weights of Object.values(WEIGHTS))
      expect(weights.reduce((sum, [, weight]) => sum + weight, 0)).toBeCloseTo(1, 12)
  })
})

describe('static tracking efficiency, EN 50530 (from memory)', () => {
  it('598, 600 and 594 W of 600 W are 0.99556, worked by hand', () => {
    expect(takenShare([598, 600, 594], [600, 600, 600], [10, 10, 10])).toBeCloseTo(0.995_56, 5)
  })

  it('counts each sample by its time, and is nothing in the dark', () => {
    expect(takenShare([300, 600], [600, 600], [30, 10])).toBeCloseTo((300 * 30 + 600 * 10) / (600 * 40), 12)
    expect(takenShare([0], [0], [60])).toBe(0)
  })
})

it('figures of some steps are sums and means worked by hand', () => {
  const power = LIMITS.indexOf('power') + 1
  const asleep = LIMITS.indexOf('asleep') + 1
  const steps = {
    inputW: Float64Array.of(100, 200, 0, 400),
    outputW: Float64Array.of(95, 190, 0, 388),
    inputV: Float64Array.of(40, 50, 60, 50),
    packV: Float64Array.of(100, 110, 120, 110),
    bestW: Float64Array.of(100, 240, 1, 440),
    deniedW: Float64Array.of(0, 40, 1, 0),
    fullW: Float64Array.of(0, 0, 0, 40),
    limit: Uint8Array.of(0, power, asleep, 0),
  }
  const figures = figuresOf(steps, [60, 30, 60, 60], [0, 3])
  expect(figures).toMatchObject({ inputJ: 12_000, lossJ: 600, bestJ: 13_260, meanInputV: 45, meanPackV: 105 })
  expect(figures.takenShare).toBeCloseTo(12_000 / 13_260, 12)
  expect(figures.edges).toEqual([{ limit: 'power', durationS: 30, deniedJ: 1200 }])
  expect(figuresOf(steps, [60, 30, 60, 60], [3, 4]).edges).toEqual([{ limit: 'full', durationS: 60, deniedJ: 2400 }])
})

describe('a thinned path', () => {
  it('of a short day keeps every step', () => expect(thinnedSteps([0, 1, 0], 200)).toEqual([0, 1, 2]))

  it('never has more steps than allowed, stays in order and shows where the longest stays began and ended', () => {
    const stays = fc.array(fc.tuple(fc.integer({ min: 0, max: 3 }), fc.integer({ min: 1, max: 60 })), {
      minLength: 1,
      maxLength: 60,
      size: 'max',
    })
    fc.assert(
      fc.property(stays, (all) => {
        const limit = all.flatMap(([name, length]) => Array.from({ length }, () => name))
        const kept = thinnedSteps(limit, 100)
        expect(kept.length).toBeLessThanOrEqual(100)
        expect(kept.length).toBeGreaterThanOrEqual(Math.min(limit.length, 70))
        expect(kept[0]).toBe(0)
        expect(kept.at(-1)).toBe(limit.length - 1)
        kept.slice(1).forEach((step, k) => expect(step).toBeGreaterThan(kept[k]))
        const longest = Math.max(...runsOf(limit).map(([from, to]) => to - from))
        const [from, to] = runsOf(limit).find(([a, b]) => b - a === longest) ?? [0, 0]
        expect(kept).toContain(from)
        expect(kept).toContain(to)
      }),
      { numRuns: 300 },
    )
  })
})

function runsOf(limit: number[]): [number, number][] {
  const starts = limit.flatMap((name, i) => (i === 0 || limit[i - 1] !== name ? [i] : []))
  return starts.map((from, k) => [from, (starts[k + 1] ?? limit.length) - 1])
}
