import { describe, expect, it } from 'vitest'
import { carEvidence } from '../../server/documents/belief-model.ts'
import { readingDocument } from '../../server/documents/reading.ts'
import { gainUncertainty } from '../../server/engine/reading-check.ts'
import {
  curveAt,
  figure,
  figuresOf,
  glanceAt,
  type Meter,
  metersFor,
  movedText,
  newId,
  readingOf,
  shownBy,
  swapped,
} from '../../web/log-reading.ts'
import { weaver } from './weaver.ts'

const METERS: Meter[] = [
  { name: 'Volts 1', measures: 'V', accuracyPct: 0.5 },
  { name: 'Clamp A', measures: 'A', accuracyPct: 1.5 },
  { name: 'Clamp B', measures: 'A', accuracyPct: 2 },
]
const FIGURES = { inputV: 97.2, inputA: 2.98, outputV: 113.4, outputA: 2.49 }
const BOTH = { inputV: 'Volts 1', inputA: 'Clamp A', outputV: 'Volts 1', outputA: 'Clamp B' }

describe('a typed figure', () => {
  it('is a number above 0 with a point or a comma, within what such meters show', () => {
    const typed = ['97.2', ' 97,2 ', '.5', '5.', '0', '-3', '1e2', '97.2 V', '', '1000', '1001']
    expect(typed.map((text) => figure(text, 'V'))).toEqual([
      97.2,
      97.2,
      0.5,
      5,
      null,
      null,
      null,
      null,
      null,
      1000,
      null,
    ])
    expect(figure('201', 'A')).toBeNull()
  })

  it('makes a reading only together with the other three', () => {
    expect(figuresOf({ inputV: '97.2', inputA: '2.98', outputV: '113.4', outputA: '' })).toBeNull()
    expect(figuresOf({ inputV: '97.2', inputA: '2,98', outputV: '113.4', outputA: '2.49' })).toEqual(FIGURES)
  })
})

describe('what four figures say by themselves', () => {
  it('is power out over power in', () => {
    // 113.4 · 2.49 = 282.366 W, 97.2 · 2.98 = 289.656 W: by hand.
    const shown = shownBy(FIGURES, BOTH, METERS)
    expect(shown.inputW).toBeCloseTo(289.656, 9)
    expect(shown.efficiencyPct).toBeCloseTo(97.4832, 4)
  })

  it('leaves out the gain of a meter that stands at both sides', () => {
    // √(1.5² + 2²)/√3 = 1.4434 % of 97.4832: JCGM 100:2008, 4.3.7; the voltmeter cancels.
    expect(shownBy(FIGURES, BOTH, METERS).uncertaintyPct).toBeCloseTo(1.40703, 4)
    const same = { ...BOTH, outputA: 'Clamp A' }
    expect(shownBy(FIGURES, same, METERS).uncertaintyPct).toBe(0)
  })

  it('is as uncertain as the service will say, with named meters and without', () => {
    const car = { ...weaver(), meters: METERS }
    for (const meters of [BOTH, {}, { inputV: 'Volts 1' }]) {
      const reading = readingOf(FIGURES, 'Tail tracker', meters, [newId(), '2026-10-17T12:00:00Z'])
      const evidence = carEvidence(car, [readingDocument.parse(reading)])
      const shown = shownBy(FIGURES, meters, METERS)
      const relative = gainUncertainty(evidence.readings[0], evidence)
      expect(shown.uncertaintyPct / shown.efficiencyPct).toBeCloseTo(relative, 12)
    }
  })
})

describe('the first sight of a reading', () => {
  const at = { efficiencyPct: 97.2, lowPct: 96.6, highPct: 97.7 }
  const shown = (efficiencyPct: number, uncertaintyPct: number) => ({
    inputW: 290,
    outputW: 0,
    efficiencyPct,
    uncertaintyPct,
  })

  it('is impossible only beyond two standard uncertainties over 100 %', () => {
    expect(glanceAt(shown(103.4, 0.8), at).kind).toBe('impossible')
    expect(glanceAt(shown(101.5, 0.8), null).kind).toBe('alone')
  })

  it('fits while meters and band together explain the distance', () => {
    expect(glanceAt(shown(97.5, 0.8), at)).toEqual({ kind: 'fits' })
    // Distance 1.6; √(1.5² + 0.6²) = 1.616 still explains it, √(1.4² + 0.6²) = 1.523 does not.
    expect(glanceAt(shown(95.6, 0.75), at).kind).toBe('fits')
    expect(glanceAt(shown(95.6, 0.7), at)).toMatchObject({ kind: 'under', points: expect.closeTo(1.6, 9) })
    expect(glanceAt(shown(98.9, 0.7), at).kind).toBe('over')
  })

  it('reads the curve straight between its points and not beyond them', () => {
    const curve = { efficiencyPct: [90, 96], lowPct: [88, 95], highPct: [92, 97] }
    expect(curveAt([100, 200], curve, 150)).toEqual({ efficiencyPct: 93, lowPct: 91.5, highPct: 94.5 })
    expect(curveAt([100, 200], curve, 100)?.efficiencyPct).toBe(90)
    expect([99, 201].map((w) => curveAt([100, 200], curve, w))).toEqual([null, null])
  })
})

describe('meters', () => {
  it('are those remembered while the car has them, else one for each side', () => {
    expect(metersFor({}, METERS)).toEqual(BOTH)
    expect(metersFor({ inputA: 'Clamp B', outputA: 'sold' }, METERS)).toEqual({ ...BOTH, inputA: 'Clamp B' })
    expect(metersFor({ inputV: 'Clamp A' }, METERS).inputV).toBe('Volts 1')
    expect(metersFor(BOTH, [])).toEqual({})
  })

  it('change over at the amps for the second reading of a pair', () => {
    expect(swapped(BOTH)).toEqual({ ...BOTH, inputA: 'Clamp B', outputA: 'Clamp A' })
  })
})

describe('a reading that is sent', () => {
  it('is one that the service takes, under an identifier of its own', () => {
    const ids = Array.from({ length: 200 }, () => newId())
    expect(new Set(ids).size).toBe(200)
    for (const meters of [BOTH, {}]) {
      const reading = readingOf(FIGURES, 'Tail tracker', meters, [ids[0], new Date(0).toISOString()])
      expect(readingDocument.safeParse(reading).success).toBe(true)
    }
    // RFC 9562, 5.4: version 4, variant 10.
    expect(newId(new Uint8Array(16).fill(255))).toBe('ffffffff-ffff-4fff-bfff-ffffffffffff')
  })

  it('tells what it moved, in Wh and in points, with their signs', () => {
    const moved = { date: '2026-10-17', pointsPct: {}, closingWhBefore: 2100, closingWhAfter: 2069.4, movedWh: -30.6 }
    expect(movedText(moved)).toBe('Moves the close by \u221231\u202fWh to 2\u202f069\u202fWh.')
    const points = { Nose: 0.04, Deck: 0.11, Tail: -1.26 }
    expect(movedText({ ...moved, movedWh: -0.4, pointsPct: points })).toBe(
      'Moves the close by less than 1\u202fWh to 2\u202f069\u202fWh; Deck +0.1 points; Tail \u22121.3 points.',
    )
  })
})
