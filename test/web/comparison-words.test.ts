import { describe, expect, it } from 'vitest'
import type { ComparedScore, SkyComparison } from '../../server/documents/sky-comparison.ts'
import { decimal, MEASURES, off, offText, placeSentence, worthSentence } from '../../web/comparison-words.ts'

const place = (forecastWhm2: number[], measuredWhm2: number[]): SkyComparison['places'][number] => ({
  name: 'Gate',
  nearest: { name: 'Saltpan', km: 2.3 },
  from: '2026-10-17T06:00:00+02:00',
  to: '2026-10-17T15:00:00+02:00',
  rows: 9,
  scores: [],
  byHour: [],
  byLead: [],
  days: forecastWhm2.map((wh, i) => ({
    date: `2026-10-${17 + i}`,
    hours: 9,
    forecastWhm2: wh,
    measuredWhm2: measuredWhm2[i],
    ratio: measuredWhm2[i] > 0 ? wh / measuredWhm2[i] : null,
  })),
})

describe('a comparison in words', () => {
  it('figures carry a true minus and a plus where they say how far off', () => {
    expect([decimal(-1.25, 1), decimal(0.04, 1), decimal(-0.04, 1), decimal(1234.4, 0)]).toEqual([
      '\u22121.3',
      '0.0',
      '0.0',
      '1\u202f234',
    ])
    expect([off(0.4, 1), off(-0.4, 1), off(0.04, 1), off(12, 0), off(-12.4, 0)]).toEqual([
      '+0.4',
      '\u22120.4',
      '0.0',
      '+12',
      '\u221212',
    ])
  })
  it('a place says how much more or less sun it was, over all its days', () => {
    expect(placeSentence(place([5000, 6000], [5000, 5000]))).toBe(
      'Gate: the forecast had 10\u202f% more sun than was measured, over 9 rows.',
    )
    expect(placeSentence(place([4000], [5000]))).toContain('20\u202f% less sun than was measured')
    expect(placeSentence(place([5001], [5000]))).toContain('as much sun as was measured')
    expect(placeSentence(place([0], [0]))).toBe('Gate: no sun was measured over 9 rows.')
  })
  it('a worth says what was promised too much or too little', () => {
    const of = (closingWh: number) => worthSentence({ date: '2026-10-17', closingWh })
    expect(of(1244)).toBe(
      'Sat 17 Oct: the forecast promised 1\u202f240\u202fWh more at the close than the measured sky gives.',
    )
    expect(of(-84)).toContain('80\u202fWh less at the close')
    expect(of(3)).toBe('Sat 17 Oct: worth nothing at the close.')
  })
  it('a measure that was not compared is a dash', () => {
    const score: ComparedScore = {
      id: 'airTempC',
      rows: 3,
      forecastMean: 20,
      measuredMean: 21.2,
      bias: -1.2,
      meanAbsoluteError: 1.2,
      rms: 1.3,
    }
    expect(offText([score], 'airTempC')).toBe('\u22121.2')
    expect(offText([score], 'windMps')).toBe('–')
    expect(Object.values(MEASURES).every(({ digits }) => digits <= 2)).toBe(true)
  })
})
