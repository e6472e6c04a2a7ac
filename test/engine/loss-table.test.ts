import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { type BenchPoint, fitLosses } from '../../server/engine/loss-fit.ts'
import { lossTable, tableExtraW } from '../../server/engine/loss-table.ts'
import { prepareTracker, type Tracker } from '../../server/engine/tracker.ts'
import { inputForOutputW, trackerOutputW } from '../../server/engine/tracker-output.ts'
import { driesseOutputW, sandiaOutputW } from './loss-models.ts'

const WINDOW = {
  inputMinV: 0,
  inputMaxV: 1000,
  inputMaxA: 100,
  outputMinV: 0,
  outputMaxV: 1000,
  outputMaxA: 100,
  maxW: 5000,
}

/** A tracker by four terms fitted to a bench, and the same with the bench's points on top. */
function bothOf(points: BenchPoint[]): { fitted: Tracker; tabled: Tracker; rmsW: number } {
  const { losses, rmsW } = fitLosses(points)
  const fitted = prepareTracker({ name: 'bow', window: WINDOW, losses, trackingEfficiency: 1 })
  const lossW = (p: BenchPoint): number => p.inputW - trackerOutputW(fitted, p.inputW, p.inputV, p.outputV)
  return { fitted, tabled: { ...fitted, table: lossTable(points, lossW) }, rmsW }
}

const grid = (volts: number[], watts: number[], outputV: number, of: (inputV: number, inputW: number) => number) =>
  volts.flatMap((inputV) => watts.map((inputW) => ({ inputV, inputW, outputV, outputW: of(inputV, inputW) })))

/** Largest and root mean square error between the bench's points, as a share of rated power. */
function errorsOf(tracker: Tracker, bench: BenchPoint[], ratedW: number, of: (V: number, W: number) => number) {
  const ends = (values: number[]): [number, number] => [Math.min(...values), Math.max(...values)]
  const [lowV, highV] = ends(bench.map((p) => p.inputV))
  const [lowW, highW] = ends(bench.map((p) => p.inputW))
  const errors: number[] = []
  for (let i = 0; i < 24; i++)
    for (let k = 0; k < 30; k++) {
      const inputV = lowV + ((highV - lowV) * i) / 23
      const inputW = lowW + ((highW - lowW) * k) / 29
      errors.push((trackerOutputW(tracker, inputW, inputV, bench[0].outputV) - of(inputV, inputW)) / ratedW)
    }
  return { most: Math.max(...errors.map(Math.abs)), rms: Math.hypot(...errors) / Math.sqrt(errors.length) }
}

describe('published loss curves of other make, pvlib-python’s tests, snapshot 6382338', () => {
  it.each([
    [154, 1232, 1161.5745],
    [390, 1170, 1116.4459],
    [420, 420, 382.6679],
  ])('nine coefficients at %f V and %f W give %f W', (inputV, inputW, outputW) => {
    expect(Math.abs(driesseOutputW(inputV, inputW) - outputW)).toBeLessThan(1e-4)
  })

  it('three coefficients that follow voltage at 25 V and 137.5 W give 132.0043 W', () => {
    expect(Math.abs(sandiaOutputW(25, 137.5) - 132.0043)).toBeLessThan(5e-5)
  })
})

const WIDE = grid([154, 220, 290, 350, 396], [110, 220, 440, 660, 1100, 1650, 2200], 450, driesseOutputW)
const NARROW = grid([250, 300, 350, 396], [220, 440, 660, 1100, 1650, 2200], 450, driesseOutputW)
const SMALL = grid([25, 30, 35, 40], [12.5, 25, 50, 75, 125, 187.5, 250], 60, sandiaOutputW)

describe('a bench of such a curve', () => {
  it.each([
    {
      name: '154–396 V',
      points: WIDE,
      ratedW: 2200,
      of: driesseOutputW,
      fit: [0.0037, 0.0011],
      table: [0.0025, 0.00036],
    },
    {
      name: '250–396 V',
      points: NARROW,
      ratedW: 2200,
      of: driesseOutputW,
      fit: [0.0011, 0.00035],
      table: [0.00075, 0.00014],
    },
    {
      name: '25–40 V',
      points: SMALL,
      ratedW: 250,
      of: sandiaOutputW,
      fit: [0.00094, 0.00042],
      table: [0.00032, 0.000096],
    },
  ])('$name: four terms come within $fit of rated power between its points, its table within $table', (one) => {
    const { fitted, tabled } = bothOf(one.points)
    const fit = errorsOf(fitted, one.points, one.ratedW, one.of)
    const table = errorsOf(tabled, one.points, one.ratedW, one.of)
    expect(fit.most).toBeLessThan(one.fit[0])
    expect(fit.rms).toBeLessThan(one.fit[1])
    expect(table.most).toBeLessThan(one.table[0])
    expect(table.rms).toBeLessThan(one.table[1])
  })

  it('comes back exactly at its points, and its inputs are found back from the outputs', () => {
    for (const points of [WIDE, NARROW, SMALL]) {
      const { tabled } = bothOf(points)
      for (const { inputV, inputW, outputV, outputW } of points) {
        expect(trackerOutputW(tabled, inputW, inputV, outputV)).toBeCloseTo(outputW, 9)
        expect(inputForOutputW(tabled, outputW, inputV, outputV) / inputW).toBeCloseTo(1, 9)
      }
    }
  })
})

describe('between a table’s points', () => {
  it('half way between two it is their mean, on a straight curve', () => {
    // A bench of nothing but standing losses of 3, 3, 5 and 5 W: the curve takes their mean, 4 W.
    const points = [100, 100, 200, 200].map((inputW) => ({
      inputV: 50,
      outputV: 100,
      inputW,
      outputW: inputW - (inputW === 100 ? 3 : 5),
    }))
    const table = lossTable(points, () => 4)
    expect(tableExtraW(table, 100, 50, 100)).toBe(-1)
    expect(tableExtraW(table, 200, 50, 100)).toBe(1)
    expect(tableExtraW(table, 150, 50, 100)).toBeCloseTo(0, 12)
    // A quarter of the way: weights 1/(1/4)⁴ and 1/(3/4)⁴, so (−81 + 1)/82.
    expect(tableExtraW(table, 125, 50, 100)).toBeCloseTo(-80 / 82, 12)
    // Beyond the bench the edge's watts carry on; a voltage that it never varied does not count.
    expect(tableExtraW(table, 20, 50, 100)).toBe(-1)
    expect(tableExtraW(table, 900, 70, 130)).toBe(1)
  })

  it('readings at one place count as their mean', () => {
    const at = (inputW: number, lossW: number) => ({ inputV: 50, outputV: 100, inputW, outputW: inputW - lossW })
    const table = lossTable([at(100, 2), at(100, 4), at(200, 6), at(300, 9)], () => 0)
    expect(tableExtraW(table, 100, 50, 100)).toBe(3)
  })

  it('output stays between nothing and the input, and no loss strays beyond what some point showed', () => {
    const { fitted, tabled } = bothOf(WIDE)
    const extras = Array.from(tabled.table?.extraW ?? [])
    const between = (min: number, max: number) => fc.double({ min, max, noNaN: true })
    fc.assert(
      fc.property(between(0, 4000), between(50, 450), between(450, 600), (inputW, inputV, packV) => {
        const outputW = trackerOutputW(tabled, inputW, inputV, packV)
        expect(outputW).toBeGreaterThanOrEqual(0)
        expect(outputW).toBeLessThanOrEqual(inputW)
        const curveW = trackerOutputW(fitted, inputW, inputV, packV)
        if (curveW <= 0 || outputW <= 0) return
        expect(curveW - outputW).toBeLessThanOrEqual(Math.max(...extras) + 1e-9)
        expect(curveW - outputW).toBeGreaterThanOrEqual(Math.min(...extras) - 1e-9)
      }),
      { numRuns: 2000 },
    )
  })
})
