import { describe, expect, it } from 'vitest'
import type { TrackerReading } from '../../server/engine/evidence.ts'
import { gainUncertainty, isSwapOf, judge, shownEfficiency } from '../../server/engine/reading-check.ts'
import { believe, EXACT, METERS, PLAIN, shown, SWAPPED, TYPICAL, WINDOW } from './read-trackers.ts'

const POINT = { inputV: 55, outputV: 110, inputW: 220 }
const belief = believe([])
const situation = { belief, window: WINDOW, packFullV: 126 }
const good = shown(POINT, TYPICAL, { meters: PLAIN, gains: [0, 0, 0, 0] })

/** A reading whose efficiency is this, all else as the good one. */
const showing = (efficiency: number, meters = PLAIN): TrackerReading => ({
  ...good,
  meters,
  outputA: (efficiency * 220) / 110,
})

describe('what a reading says', () => {
  it('is its efficiency, uncertain by 1.29 % with clamps of 1.5 % and dividers of 0.5 %', () => {
    const { efficiency, uncertainty, expected, low, high, verdict, counts } = judge(good, situation)
    expect(efficiency).toBeCloseTo(shownEfficiency(good), 12)
    // √(2(.866² + .289²)) %, all evenly likely, by hand.
    expect(Math.abs(uncertainty / efficiency - 0.0129)).toBeLessThan(5e-5)
    expect(expected).toBeCloseTo(efficiency, 12)
    expect(low).toBeLessThan(expected)
    expect(high).toBeGreaterThan(expected)
    expect([verdict, counts]).toEqual(['counts', true])
  })

  it('is not uncertain by a meter that shows both sides, and twice by one that shows two things of one side', () => {
    const both = { inputV: 0, inputA: 1, outputV: 0, outputA: 1 }
    expect(gainUncertainty({ ...good, meters: both }, { meters: METERS })).toBe(0)
    const once = { inputV: -1, inputA: 1, outputV: -1, outputA: -1 }
    expect(gainUncertainty({ ...good, meters: once }, { meters: METERS })).toBeCloseTo(0.015 / Math.sqrt(3), 12)
    const twice = { inputV: 1, inputA: 1, outputV: -1, outputA: -1 }
    expect(gainUncertainty({ ...good, meters: twice }, { meters: METERS })).toBeCloseTo(0.03 / Math.sqrt(3), 12)
    expect(gainUncertainty({ ...good, meters: EXACT }, { meters: METERS })).toBe(0)
  })
})

describe('more out than in', () => {
  // At η = 1 + e: e against 2·0.012910·(1 + e), so the edge is at e = 0.026504; by hand.
  it('by less than two standard uncertainties counts like any other', () => {
    const said = judge(showing(1.005), situation)
    expect([said.verdict, said.counts]).toEqual(['counts', true])
    expect(said.efficiency).toBeCloseTo(1.005, 12)
  })

  it('just within them is possible, though far off like any other so far from its band', () => {
    expect(judge(showing(1.0264), situation).verdict).toBe('far-off')
    const again = { ...showing(0.93), meters: SWAPPED }
    expect(judge(showing(1.0264), { ...situation, swapped: again }).verdict).toBe('counts')
  })

  it('by more is impossible, kept and left out', () => {
    const said = judge(showing(1.0266), situation)
    expect(said.verdict).toBe('impossible')
    expect(said.counts).toBe(false)
    expect(said.reason).toBe("102.7 % comes out, more than the meters' ±2.7 % allow: kept, left out")
  })

  it('from meters that do not err is impossible at once', () => {
    expect(judge(showing(1.000_1, EXACT), situation).verdict).toBe('impossible')
  })
})

describe('a reading where the tracker is held back is kept, not learned from', () => {
  const at = (change: Partial<TrackerReading>): TrackerReading => {
    const reading = { ...good, ...change }
    return { ...reading, outputA: change.outputA ?? (0.965 * reading.inputV * reading.inputA) / reading.outputV }
  }
  it.each<[string, Partial<TrackerReading>, RegExp]>([
    ['cannot-step-down', { inputV: 89.5, outputV: 90 }, /boost tracker cannot go on/],
    ['input-low', { inputV: 20.1 }, /input is at the window's lowest voltage/],
    ['input-high', { inputV: 94.5 }, /input is at the window's highest voltage/],
    ['current', { inputA: 8.95, inputV: 45 }, /input is at the window's highest current/],
    ['power', { inputV: 60, inputA: 7.48 }, /window's highest power/],
    [
      'output-current',
      { outputA: 6.95, outputV: 72, inputV: 68, inputA: 7.6 },
      /output is at the window's highest current/,
    ],
    ['output-low', { outputV: 70.4 }, /output is at the window's lowest voltage/],
    ['output-high', { outputV: 149 }, /output is at the window's highest voltage/],
  ])('%s', (limit, change, reason) => {
    const window = limit === 'output-current' ? { ...WINDOW, maxW: 900 } : WINDOW
    const said = judge(at(change), { ...situation, packFullV: null, window })
    expect(said.verdict).toBe('at-limit')
    expect(said.limit).toBe(limit)
    expect(said.counts).toBe(false)
    expect(said.reason).toMatch(reason)
    expect(said.reason).toMatch(/kept and not learned from/)
  })

  it('with the pack full', () => {
    const said = judge(at({ outputV: 125.7 }), situation)
    expect([said.verdict, said.counts, said.limit]).toEqual(['pack-full', false, null])
    expect(said.reason).toMatch(/pack is full at 125.7 V/)
    expect(judge(at({ outputV: 125 }), situation).verdict).toBe('counts')
    expect(judge(at({ outputV: 125.7 }), { ...situation, packFullV: null }).verdict).toBe('counts')
  })
})

describe('a reading far off its band', () => {
  const far = showing(0.9)

  it('does not count: swap the clamps and read again', () => {
    const said = judge(far, situation)
    expect(said.verdict).toBe('far-off')
    expect(said.counts).toBe(false)
    expect(said.distance).toBeGreaterThan(3)
    expect(said.reason).toBe('90.0 % is far below the band: swap the clamps and read again')
  })

  it('is one beyond three predictive scales, to either side and no nearer', () => {
    // Distance is linear in the lost power but for the gains' own columns: find the edge by halving.
    let [near, off] = [0.965, 0.9]
    for (let k = 0; k < 50; k++) {
      const middle = (near + off) / 2
      if (judge(showing(middle), situation).verdict === 'counts') near = middle
      else off = middle
    }
    expect(judge(showing(near), situation).distance).toBeCloseTo(3, 6)
    // By hand, shares of 220 W: gains .0128, scatter .00409, terms .0025; in squares .0137, times 3·√(4/6): .0335.
    expect(Math.abs(judge(good, situation).efficiency - near - 0.0335)).toBeLessThan(0.001)
  })

  it('counts once read with the clamps swapped, with the efficiency of both', () => {
    const again = { ...showing(0.99), id: 's', meters: SWAPPED }
    const said = judge(again, { ...situation, swapped: far })
    expect([said.verdict, said.counts]).toEqual(['counts', true])
    expect(said.swappedEfficiency).toBeCloseTo(Math.sqrt(0.9 * 0.99), 12)
    expect(said.reason).toBe('99.0 % counts; with the clamps swapped 94.4 % by both readings')
    expect(judge(far, { ...situation, swapped: again }).counts).toBe(true)
  })

  it('is not excused by a second reading of something else', () => {
    const again = { ...good, meters: SWAPPED }
    expect(isSwapOf(good, again)).toBe(true)
    expect(isSwapOf(again, good)).toBe(true)
    expect(isSwapOf(good, { ...again, meters: { inputV: 2, inputA: 3, outputV: 0, outputA: 1 } })).toBe(true)
    expect(isSwapOf(good, { ...again, meters: { ...SWAPPED, inputV: 2 } })).toBe(false)
    expect(isSwapOf(good, good)).toBe(false)
    expect(isSwapOf(good, { ...again, tracker: 1 })).toBe(false)
    expect(isSwapOf(good, { ...again, inputA: 0.7 * good.inputA })).toBe(false)
    expect(isSwapOf({ ...good, meters: EXACT }, { ...good, meters: EXACT })).toBe(false)
    expect(() => judge(good, { ...situation, swapped: good })).toThrowError(
      /not the same point with the clamps swapped/,
    )
  })
})

it('a reading that no tracker could show is refused by name', () => {
  const refused = expect.objectContaining({ name: 'InputError', field: 'reading.outputA' })
  expect(() => judge({ ...good, outputA: Number.NaN }, situation)).toThrowError(refused)
})
