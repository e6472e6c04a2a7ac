import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { merged } from '../../server/documents/merge-patch.ts'
import type { EnergyCause, VariantAnswer } from '../../web/variant-types.ts'
import {
  causeRows,
  changesText,
  differenceText,
  laterText,
  marginText,
  minText,
  minuteRows,
  patchBetween,
  printedSum,
} from '../../web/variant-words.ts'

const plain = (text: string): string => text.replaceAll('\u202f', ' ')

describe('the words of a variant', () => {
  it('name it by what its sliders stand at', () => {
    expect(changesText({ sunPct: 90, headwindMps: 2 })).toBe('Sun 90 %, Headwind +2 m/s')
    const all = { sunPct: 90, headwindMps: 2.5, openingPct: -10, stopMinutes: 15, rollingPct: 110, dragAreaPct: 105 }
    expect(changesText({ ...all, massKg: 20 })).toBe('Sun 90 % and 6 more')
  })

  it('say how much later it is, to the minute', () => {
    expect([0.4, -0.4, 12.4, -7.6, 65.2].map((min) => plain(laterText(min)))).toEqual([
      'as early',
      'as early',
      '12 min later',
      '8 min earlier',
      '1 h 05 later',
    ])
  })

  it('print parts of a difference so that they add up as they stand', () => {
    const parts = [5.94, -0.04, 0.06, -1.26].map((min, i) => ({ id: `${i}`, label: `${i}`, min }))
    const { rows, sumMin } = minuteRows(parts)
    expect(rows.map(({ min }) => minText(min))).toEqual(['+5.9', '+0.1', '\u22121.3'])
    expect(minText(sumMin)).toBe('+4.7')
    expect(minText(0.04)).toBe('0')
  })

  it('lay lines at the plan’s speeds and at its own side by side, the largest first, without those of nothing', () => {
    const line = (id: string, wh: number): EnergyCause => ({ id, label: id.toUpperCase(), wh })
    const held = [line('sun', -200.4), line('drag', 0.2), line('stop:a', 3), line('pack', 0.3)]
    const atBaseSpeeds = { finishes: true, arriveAt: '', closingWh: 0, leastSpareWh: 0, causes: held }
    const rows = causeRows({ atBaseSpeeds, energyCauses: [line('sun', -190.7), line('drag', 260.5), line('pack', 0)] })
    expect(rows).toEqual([
      { id: 'drag', label: 'DRAG', heldWh: 0.2, ownWh: 260.5 },
      { id: 'sun', label: 'SUN', heldWh: -200.4, ownWh: -190.7 },
      { id: 'stop:a', label: 'STOP:A', heldWh: 3, ownWh: null },
    ])
    expect(rows.map(({ ownWh }) => differenceText(ownWh))).toEqual(['+261', '\u2212191', '–'])
    // 261 − 191 as printed.
    expect(printedSum(rows.map(({ ownWh }) => ownWh))).toBe(70)
  })

  it('tell on which side of reserve and target it stays', () => {
    const answer = (leastSpareWh: number, overTargetWh: number) =>
      ({ figures: { leastSpareWh, overTargetWh } }) as VariantAnswer
    expect(plain(marginText(answer(120, 4)))).toBe('Stays 120 Wh over the reserve, closes 4 Wh over what is wanted.')
    expect(plain(marginText(answer(-80, -40)))).toBe(
      'Falls 80 Wh below the reserve, closes 40 Wh short of what is wanted.',
    )
  })
})

describe('the patch between two documents', () => {
  const value = fc.letrec((tie) => ({
    leaf: fc.oneof(fc.integer(), fc.string(), fc.boolean(), fc.array(fc.integer(), { maxLength: 3 })),
    node: fc.dictionary(fc.constantFrom('a', 'b', 'c', 'd'), fc.oneof({ maxDepth: 3 }, tie('leaf'), tie('node'))),
  })).node

  it('makes the one of the other', () => {
    fc.assert(
      fc.property(value, value, (own, other) => {
        expect(merged(own, patchBetween(own, other))).toEqual(other)
        expect(patchBetween(own, own)).toEqual({})
      }),
    )
  })
})
