import { describe, expect, it } from 'vitest'
import { type Estimated, fitCoastDown } from '../../server/engine/coast-down.ts'
import { residualNoise } from '../../server/engine/coast-down-noise.ts'
import type { CoastRun } from '../../server/engine/coast-down-trace.ts'
import { bothWays, coastRun, measured, testOf } from './coast-runs.ts'
import { normalFrom, seeded } from './seeded.ts'

const SEEDS = 500

const holds = ({ low, high }: Estimated, truth: number): number => Number(low <= truth && truth <= high)

/** How many of so many seeds' intervals hold rolling and drag of the invented car. */
function coverage(seeds: number, runsOf: (seed: number) => CoastRun[]) {
  const held = { rolling: 0, drag: 0, wind: 0, rollingSd: 0, rollingError: 0 }
  for (let seed = 1; seed <= seeds; seed++) {
    const fit = fitCoastDown(testOf(runsOf(seed)))
    if (fit.kind === 'refused') throw new Error(`seed ${seed}: ${fit.reasons[0].detail}`)
    held.rolling += holds(fit.rollingCoefficient, 0.0035)
    held.drag += holds(fit.dragAreaM2, 0.1)
    held.wind += fit.windMps === null ? 0 : holds(fit.windMps, 2)
    held.rollingSd += fit.rollingCoefficient.sd / seeds
    held.rollingError += (fit.rollingCoefficient.value - 0.0035) / seeds
  }
  return held
}

const isAbout95 = (held: number, of: number): void => {
  expect(held / of).toBeGreaterThanOrEqual(0.92)
  expect(held / of).toBeLessThanOrEqual(0.98)
}

describe('of 500 tests with noise, 92 to 98 in 100 intervals hold the truth', () => {
  it('of wind and slope that nobody measured', { timeout: 60_000 }, () => {
    const held = coverage(SEEDS, (seed) =>
      bothWays({ windMps: 2, grade: 0.0005, noiseMps: 0.06, stepS: 2, toKmh: 20 }, seed),
    )
    for (const count of [held.rolling, held.drag, held.wind]) isAbout95(count, SEEDS)
    // Biased by no more than a mean of 500 scatters.
    expect(Math.abs(held.rollingError)).toBeLessThan((4 * held.rollingSd) / Math.sqrt(SEEDS))
  })

  it('of still air on a level road, both stated', { timeout: 60_000 }, () => {
    const held = coverage(SEEDS, (seed) =>
      bothWays({ noiseMps: 0.06, stepS: 2, toKmh: 20 }, seed).map((run) => measured(run, 0, 0)),
    )
    for (const count of [held.rolling, held.drag]) isAbout95(count, SEEDS)
  })

  it('of a measured wind, gusts in it, one way', { timeout: 60_000 }, () => {
    const held = coverage(200, (seed) => [
      measured(coastRun(1, { windMps: 2, noiseMps: 0.06, stepS: 2 }, normalFrom(seeded(seed))), 0, 2),
    ])
    for (const count of [held.rolling, held.drag]) isAbout95(count, 200)
  })
})

describe('where neighbouring rows err alike', () => {
  const MEMORY = 0.7
  /** Noise of which 0.7 is carried to the next row, with the same spread. */
  function carried(seed: number): () => number {
    const normal = normalFrom(seeded(seed))
    let last = normal()
    return () => (last = MEMORY * last + Math.sqrt(1 - MEMORY * MEMORY) * normal())
  }

  it('intervals widen, and 9 of 10 still hold the truth', { timeout: 60_000 }, () => {
    const seeds = 300
    const runsOf = (seed: number): CoastRun[] => {
      const normal = carried(seed)
      return ([1, -1, 1, -1] as const).map((direction) => coastRun(direction, { noiseMps: 0.06, windMps: 2 }, normal))
    }
    const held = coverage(seeds, runsOf)
    for (const count of [held.rolling, held.drag]) expect(count / seeds).toBeGreaterThanOrEqual(0.9)
    const white = coverage(50, (seed) => bothWays({ noiseMps: 0.06, windMps: 2 }, seed))
    // By hand: (1 + 0.7)/(1 − 0.7) = 5.67 rows make one fact, so errors are √5.67 = 2.38 times as large.
    expect(held.rollingSd / white.rollingSd).toBeGreaterThan(2.38 * 0.85)
    expect(held.rollingSd / white.rollingSd).toBeLessThan(2.38 * 1.15)
  })

  it('the rows that make one fact are found: (1 + ρ)/(1 − ρ) of a noise with memory ρ, 1 of one without', () => {
    const noiseOf = (draw: () => number): Float64Array[] =>
      Array.from({ length: 4 }, () => Float64Array.from({ length: 4000 }, draw))
    const remembering = residualNoise(noiseOf(carried(11)))
    expect(remembering.isWhite).toBe(false)
    expect(remembering.lagOne).toBeCloseTo(0.7, 1)
    expect(remembering.rowsPerFact / 5.67).toBeGreaterThan(0.85)
    expect(remembering.rowsPerFact / 5.67).toBeLessThan(1.15)
    const white = residualNoise(noiseOf(normalFrom(seeded(12))))
    expect(white).toMatchObject({ isWhite: true, rowsPerFact: 1 })
    expect(Math.abs(white.lagOne)).toBeLessThan(0.03)
  })

  it('white noise passes the test for whiteness 99 times in 100', () => {
    let passed = 0
    for (let seed = 1; seed <= 500; seed++) {
      const normal = normalFrom(seeded(seed))
      if (residualNoise([Float64Array.from({ length: 400 }, normal)]).isWhite) passed++
    }
    expect(passed).toBeGreaterThanOrEqual(485)
    expect(passed).toBeLessThan(500)
  })
})
