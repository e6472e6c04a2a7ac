import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { climbM, fillHeights, smoothHeights } from '../../server/files/elevation.ts'
import { smoothingSpline } from '../../server/files/smoothing-spline.ts'

/** Repeatable normal noise: a small congruential generator and Box–Muller. */
function normals(count: number, seed: number): number[] {
  let state = seed
  const uniform = () => (state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0) / 2 ** 32 + 2 ** -33
  return Array.from({ length: count }, () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform()))
}

const evenly = (count: number, stepM: number) => Float64Array.from({ length: count }, (_, i) => i * stepM)

/** Two overlaid waves, 4 km and 11 km, up to 5 % steep: 16 m of climb a km, known without noise. */
const hills = (s: number) => 40 + 25 * Math.sin((2 * Math.PI * s) / 4000) + 30 * Math.sin((2 * Math.PI * s) / 11_000)

describe('the smoothing of recorded heights', () => {
  it('leaves a straight ramp and a level road as they are, whatever the spacing of the points', () => {
    const steps = fc.array(fc.double({ min: 0.5, max: 800, noNaN: true }), { minLength: 2, maxLength: 300 })
    const grade = fc.oneof(fc.constant(0), fc.double({ min: -0.15, max: 0.15, noNaN: true }))
    fc.assert(
      fc.property(steps, grade, (stepsM, rise) => {
        const along = Float64Array.from([0, ...stepsM])
        for (let i = 1; i < along.length; i++) along[i] += along[i - 1]
        const ramp = along.map((s) => 500 + rise * s)
        const { elevationM } = smoothHeights(along, ramp)
        const off = elevationM.map((m, i) => Math.abs(m - ramp[i]))
        expect(Math.max(...off)).toBeLessThan(1e-4)
      }),
      { numRuns: 300, seed: 1 },
    )
  })

  it.each([
    { stepM: 5, seed: 1 },
    { stepM: 11, seed: 2 },
    { stepM: 11, seed: 3 },
    { stepM: 20, seed: 4 },
    { stepM: 30, seed: 5 },
  ])('gives back the climb of known hills within 2 % under 3 m of noise, a point each $stepM m', ({ stepM, seed }) => {
    const along = evenly(Math.round(80_000 / stepM), stepM)
    const truth = along.map(hills)
    const noise = normals(along.length, seed)
    const recorded = truth.map((m, i) => m + 3 * noise[i])
    const { elevationM, noiseM, climbBeforeM, climbAfterM } = smoothHeights(along, recorded)
    expect(climbBeforeM).toBeGreaterThan(4 * climbM(truth))
    expect(Math.abs(climbAfterM / climbM(truth) - 1)).toBeLessThan(0.02)
    expect(noiseM).toBeGreaterThan(2.85)
    expect(noiseM).toBeLessThan(3.15)
    const rms = Math.sqrt(elevationM.reduce((sum, m, i) => sum + (m - truth[i]) ** 2, 0) / along.length)
    expect(rms).toBeLessThan(1.2)
  })

  it('keeps the height of a pass within 2 m under noise, and within 1 m without', () => {
    const along = evenly(2000, 10)
    // 6 % up, 6 % down, joined by a crest 400 m long, as roads are laid out (common practice, no source).
    const pass = along.map((s) => {
      const d = Math.abs(s - 10_000)
      return 2000 - (d < 200 ? (0.06 * d * d) / 400 : 0.06 * (d - 100))
    })
    const noise = normals(along.length, 9)
    expect(Math.max(...smoothHeights(along, pass).elevationM)).toBeGreaterThan(1999)
    const noisy = smoothHeights(
      along,
      pass.map((m, i) => m + 3 * noise[i]),
    )
    expect(Math.abs(Math.max(...noisy.elevationM) - 2000)).toBeLessThan(2)
  })

  it('passes the hills of a sparse plan through unchanged', () => {
    const along = evenly(40, 2500)
    const recorded = along.map((s) => 300 + 120 * Math.sin(s / 9000))
    const { elevationM, noiseM } = smoothHeights(along, recorded)
    expect(noiseM).toBe(0)
    expect(Math.max(...elevationM.map((m, i) => Math.abs(m - recorded[i])))).toBeLessThan(0.01)
  })

  it('takes a car at rest as one point', () => {
    const along = Float64Array.from([
      ...evenly(50, 10),
      ...Array.from({ length: 500 }, () => 490.5),
      ...evenly(50, 10).map((s) => s + 500),
    ])
    const recorded = along.map((s, i) => 100 + 0.02 * s + (i >= 50 && i < 550 ? (i % 2) - 0.5 : 0))
    const { climbBeforeM, climbAfterM } = smoothHeights(along, recorded)
    expect(climbBeforeM).toBeGreaterThan(250)
    expect(climbAfterM).toBeCloseTo(0.02 * 990, 1)
  })
})

describe('the smoothing spline', () => {
  it.each([150, 400, 628.3185, 1000, 3000])(
    'keeps 1 / (1 + (2πL/λ)⁴) of a wave of %d m, as its theory says',
    (waveM) => {
      const lengthM = 100
      const x = evenly(4001, 5)
      const y = x.map((s) => Math.sin((2 * Math.PI * s) / waveM))
      const smooth = smoothingSpline(x, y, lengthM)
      const middle = [...x.keys()].slice(1000, 3000)
      const kept =
        middle.reduce((sum, i) => sum + smooth[i] * y[i], 0) / middle.reduce((sum, i) => sum + y[i] * y[i], 0)
      expect(kept).toBeCloseTo(1 / (1 + ((2 * Math.PI * lengthM) / waveM) ** 4), 3)
    },
  )
})

describe('missing heights', () => {
  it('are filled along the distance, not by the count of points, and level at both ends', () => {
    const heights = Float64Array.of(Number.NaN, 10, Number.NaN, Number.NaN, 20, Number.NaN)
    expect(fillHeights(Float64Array.of(0, 100, 120, 180, 200, 300), heights)).toBe(4)
    expect([...heights]).toEqual([10, 10, 12, 18, 20, 20])
  })
})
