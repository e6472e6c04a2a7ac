import { expect, it } from 'vitest'
import { coverageFactor, learn } from '../../server/engine/belief.ts'
import { quadratic } from '../../server/engine/matrix.ts'
import { TERMS, termsOf, lossesOf } from '../../server/engine/loss-terms.ts'
import { METERS, PLAIN, pointsOver, priorTracker, shown, SWAPPED, TYPICAL } from './read-trackers.ts'
import { normalFrom, seeded } from './seeded.ts'

const SEEDS = 500
const TRACKERS = [priorTracker('bow'), priorTracker('stern', { ...TYPICAL, standingW: 1, conductionOhm: 0.09 })]

/** Losses at 220 W, 55 V in, 110 V out. */
const WORKING = [1, 4 * 110, 16, 1.95]

interface Claim {
  name: string
  error: number
  half: number
}

/** One race: a truth drawn from the priors, read by meters drawn from theirs, and what is claimed of it. */
function race(seed: number): Claim[] {
  const uniform = seeded(seed)
  const normal = normalFrom(uniform)
  const gains = METERS.map(({ gainSd }) => gainSd * normal())
  const truths = TRACKERS.map(({ losses }) =>
    termsOf(losses).map((value) => Math.max(value * (1 + 0.25 * normal()), 0)),
  )
  const points = pointsOver([70, 190, 330])
  const readings = Array.from({ length: 4 + Math.floor(uniform() * 16) }, (_, n) => {
    const point = points[Math.floor(uniform() * points.length)]
    const meters = uniform() < 0.3 ? SWAPPED : PLAIN
    const tracker = n % 2
    return shown(point, lossesOf(truths[tracker]), { tracker, meters, gains, scatterW: 0.002 * 450 * normal() })
  })
  const belief = learn({ trackers: TRACKERS, meters: METERS, readings })
  const factor = coverageFactor(belief)
  return [
    ...belief.trackers.flatMap(({ name, losses, sd, covariance }, t) => [
      ...TERMS.map((term, j) => ({
        name: `${name} ${term}`,
        error: losses[term] - truths[t][j],
        half: factor * sd[term],
      })),
      {
        name: `${name} loss`,
        error: termsOf(losses).reduce((sum, value, j) => sum + (value - truths[t][j]) * WORKING[j], 0),
        half: factor * Math.sqrt(quadratic(covariance, WORKING)),
      },
    ]),
    ...belief.meters.map(({ name, gain, sd }, k) => ({ name, error: gain - gains[k], half: factor * sd })),
  ]
}

it('in 500 invented races 95 % intervals hold the truth of every term, loss and gain in 92–98 %', () => {
  const held = new Map<string, number>()
  for (let seed = 1; seed <= SEEDS; seed++) {
    for (const { name, error, half } of race(seed)) {
      held.set(name, (held.get(name) ?? 0) + (Math.abs(error) <= half ? 1 : 0))
    }
  }
  expect(held.size).toBe(14)
  for (const [name, count] of held) {
    expect(count / SEEDS, name).toBeGreaterThanOrEqual(0.92)
    expect(count / SEEDS, name).toBeLessThanOrEqual(0.98)
  }
  const all = [...held.values()].reduce((sum, count) => sum + count, 0) / SEEDS / held.size
  expect(all).toBeGreaterThan(0.94)
  expect(all).toBeLessThan(0.965)
})
