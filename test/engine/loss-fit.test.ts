import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { type BenchPoint, fitLosses } from '../../server/engine/loss-fit.ts'
import type { Tracker, TrackerLosses } from '../../server/engine/tracker.ts'
import { trackerOutputW } from '../../server/engine/tracker-output.ts'

const LOSSES: TrackerLosses = { standingW: 0.6, switchingFraction: 0.004, conductionOhm: 0.05, rectifierV: 0.4 }

/** A bench with these losses: three voltages in, three out, six powers. */
function bench(losses: TrackerLosses, error: (k: number) => number = () => 0): BenchPoint[] {
  const window = {
    inputMinV: 0,
    inputMaxV: 200,
    inputMaxA: 50,
    outputMinV: 0,
    outputMaxV: 200,
    outputMaxA: 50,
    maxW: 900,
  }
  const tracker: Tracker = { name: 'bench', window, losses, trackingEfficiency: 1 }
  const points: BenchPoint[] = []
  for (const inputV of [35, 50, 65]) {
    for (const outputV of [80, 100, 125]) {
      for (const inputW of [20, 50, 100, 150, 220, 300]) {
        const outputW = trackerOutputW(tracker, inputW, inputV, outputV) + error(points.length)
        points.push({ inputV, outputV, inputW, outputW: Math.min(outputW, inputW) })
      }
    }
  }
  return points
}

describe('losses from a bench', () => {
  it('come back from clean points at several voltages', () => {
    const { losses, rmsW } = fitLosses(bench(LOSSES))
    for (const name of ['standingW', 'switchingFraction', 'conductionOhm', 'rectifierV'] as const) {
      expect(losses[name] / LOSSES[name]).toBeCloseTo(1, 9)
    }
    expect(rmsW).toBeLessThan(1e-9)
  })

  it('come back from efficiencies as well as from powers', () => {
    const points = bench(LOSSES).map(({ outputW = 0, ...rest }) => ({ ...rest, efficiency: outputW / rest.inputW }))
    expect(fitLosses(points).losses.conductionOhm).toBeCloseTo(0.05, 9)
  })

  it('leave a term at nothing that the bench does not show', () => {
    const { losses } = fitLosses(bench({ ...LOSSES, rectifierV: 0, standingW: 0 }))
    expect(losses.rectifierV).toBe(0)
    expect(losses.standingW).toBe(0)
    expect(losses.switchingFraction).toBeCloseTo(0.004, 9)
  })

  it('are never negative, and no other choice of terms fits better, whatever the readings', () => {
    const between = (min: number, max: number) => fc.double({ min, max, noNaN: true })
    fc.assert(
      fc.property(fc.array(between(-2, 2), { minLength: 54, maxLength: 54 }), (errors) => {
        const points = bench(LOSSES, (k) => errors[k])
        const { losses, rmsW } = fitLosses(points)
        const rmsOf = (own: TrackerLosses): number => {
          const left = points.map(({ inputV, outputV, inputW, outputW = 0 }) => {
            const inputA = inputW / inputV
            const modelW = own.standingW + own.switchingFraction * inputA * outputV + own.conductionOhm * inputA ** 2
            return inputW - outputW - modelW - own.rectifierV * (outputW / outputV)
          })
          return Math.sqrt(left.reduce((sum, value) => sum + value * value, 0) / left.length)
        }
        expect(rmsOf(losses)).toBeCloseTo(rmsW, 9)
        for (const name of ['standingW', 'switchingFraction', 'conductionOhm', 'rectifierV'] as const) {
          expect(losses[name]).toBeGreaterThanOrEqual(0)
          for (const nudge of [0.9, 1.1]) {
            expect(rmsOf({ ...losses, [name]: losses[name] * nudge })).toBeGreaterThanOrEqual(rmsW - 1e-9)
          }
          const step = LOSSES[name] * 0.01
          expect(rmsOf({ ...losses, [name]: losses[name] + step })).toBeGreaterThanOrEqual(rmsW - 1e-9)
        }
      }),
      { numRuns: 200 },
    )
  })

  it('of one pair of voltages go to as few terms as explain them', () => {
    const points = bench(LOSSES).filter(({ inputV, outputV }) => inputV === 50 && outputV === 100)
    const { losses, rmsW } = fitLosses(points)
    expect(rmsW).toBeLessThan(0.01)
    expect(losses.standingW).toBeCloseTo(0.6, 1)
  })

  it('a curve that wants a negative slope gets none: efficiencies 0.93, 0.975, 0.97 of 1000 W', () => {
    const points = [
      [0.1, 0.93],
      [0.5, 0.975],
      [1, 0.97],
      [1, 0.97],
    ].map(([share, efficiency]) => ({
      inputV: 80,
      outputV: 100,
      inputW: 1000 * share,
      efficiency,
    }))
    // Losses .007, .0125, .03 of 1000 W: divided differences give the polynomial through them, worked by hand.
    const [first, second] = [(0.0125 - 0.007) / 0.4, (0.03 - 0.0125) / 0.5]
    const c = (second - first) / 0.9
    const b = first - c * 0.6
    expect([0.007 - b * 0.1 - c * 0.01, b, c]).toEqual([
      expect.closeTo(0.006_805_6, 7),
      expect.closeTo(-0.000_416_67, 8),
      expect.closeTo(0.023_611_1, 7),
    ])
    const { losses } = fitLosses(points)
    for (const term of Object.values(losses)) expect(term).toBeGreaterThanOrEqual(0)
    expect(losses.switchingFraction).toBe(0)
    expect(losses.standingW / 1000).toBeCloseTo(0.0068, 3)
    expect((losses.conductionOhm * 1000) / 80 ** 2).toBeCloseTo(0.0233, 3)
  })
})

describe('what a bench tells', () => {
  const told = (points: BenchPoint[]) => fitLosses(points).told
  const at = (...pairs: [number, number][]) =>
    bench(LOSSES).filter((p) => pairs.some(([inputV, outputV]) => p.inputV === inputV && p.outputV === outputV))

  it('at three voltages each side: every term', () => {
    expect(told(bench(LOSSES))).toEqual({
      terms: { standingW: true, switchingFraction: true, conductionOhm: true, rectifierV: true },
      sums: [],
    })
  })

  it('at one pair of voltages: switching and rectifier both go with power, so only their sum', () => {
    const { terms, sums } = told(at([50, 100]))
    expect(terms).toMatchObject({ switchingFraction: false, rectifierV: false })
    expect(sums).toContainEqual(['switchingFraction', 'rectifierV'])
  })

  it('at one power and one pair of voltages: nothing but what all lose together', () => {
    const point = at([50, 100])[3]
    const { terms, sums } = told([point, point, point, point])
    expect(Object.values(terms)).toEqual([false, false, false, false])
    expect(sums).toEqual([['standingW', 'switchingFraction', 'conductionOhm', 'rectifierV']])
  })

  it('less where its points are less sure, down to nothing', () => {
    const count = (efficiencySd: number): number => {
      const { terms, sums } = told(bench(LOSSES).map((point) => ({ ...point, efficiencySd })))
      return Object.values(terms).filter(Boolean).length + sums.length
    }
    expect(count(0.001)).toBe(4)
    expect(count(5)).toBe(0)
  })

  it('at one input and three output voltages, carefully read: every term', () => {
    // One input voltage, several output voltages: Iin·Vout and Iout are not in step any more.
    const { terms } = told(at([50, 80], [50, 100], [50, 125]).map((p) => ({ ...p, efficiencySd: 0.001 })))
    expect(terms).toEqual({ standingW: true, switchingFraction: true, conductionOhm: true, rectifierV: true })
  })
})

describe('a wrong bench point is refused by name', () => {
  const good: BenchPoint = { inputV: 50, outputV: 100, inputW: 100, outputW: 96 }
  it.each([
    ['points[2].inputV', { ...good, inputV: 0 }],
    ['points[2].inputW', { ...good, inputW: Number.NaN }],
    ['points[2].outputW', { ...good, outputW: 101 }],
    ['points[2].efficiency', { ...good, outputW: undefined, efficiency: 1.2 }],
    ['points[2]', { ...good, efficiency: 0.96 }],
    ['points[2]', { ...good, outputW: undefined }],
  ])('%s', (field, point) => {
    expect(() => fitLosses([good, good, point, good])).toThrowError(expect.objectContaining({ field }))
  })

  it('three points are too few', () => expect(() => fitLosses([good, good, good])).toThrowError(/3 given, at least 4/))
})
