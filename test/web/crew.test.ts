import { describe, expect, it } from 'vitest'
import { curveAxes, fallPath } from '../../web/charts/curve-paths.ts'
import { choiceOf, isSame } from '../../web/choice.ts'
import type { FollowedChoice } from '../../web/crew-types.ts'

const FOLLOWED: FollowedChoice = {
  until: null,
  carId: 'weaver-2',
  skyId: 'plateau-forecast',
  speeds: { kind: 'constant', speedKmh: 78 },
  version: 1,
  savedAt: '2026-10-17T06:00:00Z',
}
const shown = (query: string) => choiceOf(`#/log?race=plateau-run&date=2026-10-17&${query}`)

describe('what a page shows', () => {
  it('is what the crew follows when car, sky and speeds are the same, on whichever screen', () => {
    expect(isSame(shown('car=weaver-2&sky=plateau-forecast&kmh=78'), FOLLOWED)).toBe(true)
    for (const other of ['car=weaver-2&sky=plateau-forecast&kmh=77', 'car=weaver-2&sky=other&kmh=78', 'kmh=78'])
      expect(isSame(shown(other), FOLLOWED), other).toBe(false)
    expect(isSame(shown('car=weaver-2&sky=plateau-forecast&kmh=78'), null)).toBe(false)
  })
})

describe('the chart of a tracker', () => {
  const curve = { efficiencyPct: [90, 97], lowPct: [85, 96], highPct: [94, 98] }
  const axes = (marks: Parameters<typeof curveAxes>[0]['marks']) =>
    curveAxes({ width: 358, maxW: 500, curve, marks, hasFall: true })

  it('holds every reading with its whiskers, below the curve and beyond 100 %', () => {
    const mark = (inputW: number, efficiencyPct: number) => ({ inputW, efficiencyPct, uncertaintyPct: 1, counts: true })
    const marks = [mark(300, 80), mark(650, 106)]
    const { x, y, base, right } = axes(marks)
    for (const { inputW, efficiencyPct } of marks) {
      expect(x(inputW)).toBeLessThanOrEqual(right)
      expect(y(efficiencyPct - 2)).toBeLessThanOrEqual(base)
      expect(y(efficiencyPct + 2)).toBeGreaterThanOrEqual(0)
    }
  })

  it('draws where the energy fell by density, so that a wide bin does not look taller', () => {
    const { foot, base } = axes([])
    const heights = (fell: { fromW: number; toW: number; wh: number }[]) =>
      [...fallPath(axes([]), fell).matchAll(/L[\d.]+ ([\d.]+)H/g)].map(([, top]) => foot - Number(top))
    const [narrow, wide] = heights([
      { fromW: 0, toW: 50, wh: 100 },
      { fromW: 50, toW: 150, wh: 100 },
    ])
    expect(narrow).toBeCloseTo(2 * wide, 6)
    expect(narrow).toBeLessThan(foot - base)
  })
})
