import { describe, expect, it } from 'vitest'
import { firstAbove } from '../../../server/engine/planner/crossing.ts'
import { uniform } from './cloudy-day.ts'

/** An increasing curve through 0 at `rootS`, bent one way or the other. */
const curve = (rootS: number, bend: number, slope: number) => (s: number) =>
  slope * (Math.sign(s - rootS) * Math.abs(s - rootS) ** bend) * 100 ** (1 - bend)

describe('the first instant at which energy suffices', () => {
  it('is met from above, within a millisecond or a joule, whatever the curve', () => {
    const next = uniform(11)
    for (let n = 0; n < 500; n++) {
      const rootS = 1000 + 100 * next()
      const J = curve(rootS, 0.3 + 2 * next(), 1 + 2000 * next())
      let asked = 0
      const excess = (s: number): number => {
        asked++
        return J(s)
      }
      const found = firstAbove(excess, { atS: 990, J: J(990) }, { atS: 1110, J: J(1110) })
      expect(found.atS).toBeGreaterThanOrEqual(rootS - 1e-9)
      expect(found.J).toBeGreaterThanOrEqual(0)
      expect(Math.min((found.atS - rootS) / 1e-3, found.J)).toBeLessThanOrEqual(1)
      expect(asked).toBeLessThanOrEqual(40)
    }
  })

  it('comes close behind an edge before which nothing can be reached', () => {
    const excess = (s: number): number => (s < 50 ? Number.NEGATIVE_INFINITY : 200 + s)
    const found = firstAbove(excess, { atS: 0, J: Number.NEGATIVE_INFINITY }, { atS: 100, J: 300 })
    expect(found.atS).toBeGreaterThanOrEqual(50)
    expect(found.atS).toBeLessThan(50.01)
  })
})
