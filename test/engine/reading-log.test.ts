import { describe, expect, it } from 'vitest'
import { learn } from '../../server/engine/belief.ts'
import type { TrackerReading } from '../../server/engine/evidence.ts'
import { judgeInOrder } from '../../server/engine/reading-log.ts'
import { METERS, PLAIN, pointsOver, priorTracker, shown, SWAPPED, TYPICAL, WINDOW } from './read-trackers.ts'

const trackers = [priorTracker('bow')]
const judgeAll = (readings: TrackerReading[]) =>
  judgeInOrder({ trackers, windows: [WINDOW], meters: METERS, readings, packFullV: 126 })
const POINT = { inputV: 55, outputV: 110, inputW: 220 }
const gains = [0, 0.02, 0, -0.02]

describe('readings one after another', () => {
  it('that count are learned from, the others are not', () => {
    const counting = pointsOver([80, 200]).map((point, n) =>
      shown(point, TYPICAL, { id: `r${n}`, meters: PLAIN, gains: [0, 0, 0, 0] }),
    )
    const full = { ...counting[0], id: 'full', outputV: 126, outputA: counting[0].outputA * 0.7 }
    const impossible = { ...counting[1], id: 'impossible', outputA: counting[1].outputA * 1.2 }
    const { judgements, belief } = judgeAll([
      counting[0],
      full,
      ...counting.slice(1, 4),
      impossible,
      ...counting.slice(4),
    ])
    expect(judgements.map(({ verdict }) => verdict).filter((verdict) => verdict !== 'counts')).toEqual([
      'pack-full',
      'impossible',
    ])
    expect(judgements).toHaveLength(14)
    expect(belief).toEqual(learn({ trackers, meters: METERS, readings: counting }))
  })

  it('a far one counts when the clamps are swapped, and both are learned from', () => {
    const first = shown(POINT, TYPICAL, { id: 'a', meters: PLAIN, gains })
    const second = shown(POINT, TYPICAL, { id: 'b', meters: SWAPPED, gains })
    const alone = judgeAll([first])
    expect(alone.judgements[0].verdict).toBe('far-off')
    expect(alone.belief).toEqual(learn({ trackers, meters: METERS, readings: [] }))
    const both = judgeAll([first, second])
    expect(both.judgements.map(({ counts }) => counts)).toEqual([true, true])
    expect(both.judgements[0].swappedEfficiency).toBe(both.judgements[1].swappedEfficiency)
    expect(both.belief).toEqual(learn({ trackers, meters: METERS, readings: [first, second] }))
    expect(both.belief.meters[1].gain - both.belief.meters[3].gain).toBeGreaterThan(0.02)
  })

  it('is judged by what was held before it: a clamp found out no longer puts readings far off', () => {
    const swaps = [0, 1, 2, 3].map((n) =>
      shown(POINT, TYPICAL, { id: `r${n}`, meters: n % 2 ? SWAPPED : PLAIN, gains }),
    )
    const { judgements } = judgeAll([...swaps, shown({ ...POINT, inputW: 100 }, TYPICAL, { meters: PLAIN, gains })])
    expect(Math.abs(judgements[4].distance)).toBeLessThan(1)
  })

  it('needs a window for each tracker and readings that can be', () => {
    const log = { trackers, windows: [], meters: METERS, readings: [], packFullV: null }
    expect(() => judgeInOrder(log)).toThrowError(/windows: 0 given, 1 expected/)
    const bad = { ...shown(POINT, TYPICAL), tracker: 3 }
    expect(() => judgeAll([shown(POINT, TYPICAL), bad])).toThrowError(/readings\[1\].tracker: 3 given/)
  })
})
