import { describe, expect, it } from 'vitest'
import type { KeptReading, TrackerReport } from '../../web/crew-types.ts'
import { spoken } from '../../web/sentence.ts'
import { moveText, offBench, overDay, standingOf, trackersSentence, untold } from '../../web/tracker-words.ts'

const curve = (pct: number, half: number): TrackerReport['bench'] => ({
  efficiencyPct: [pct, pct],
  lowPct: [pct - half, pct - half],
  highPct: [pct + half, pct + half],
})

const READING: KeptReading = {
  reading: {
    id: '5f0c2b1e-2f6b-4a4e-9a58-0d3f1f0b7c11',
    tracker: 'Tail tracker',
    at: '2026-10-17T12:00:00Z',
    inputV: 97,
    inputA: 3,
    outputV: 113,
    outputA: 2.5,
  },
  carId: 'weaver-2',
  carVersion: 1,
  receivedAt: '2026-10-17T12:00:01Z',
  isSetAside: false,
  verdict: 'counts',
  counts: true,
  reason: 'counts',
  limit: null,
  efficiencyPct: 97.1,
  uncertaintyPct: 0.8,
  expectedPct: 97,
  bandPct: [96, 98],
  swappedEfficiencyPct: null,
}

const DAY = {
  date: '2026-10-17',
  wh: 2500,
  sharePct: 33,
  outsideMin: 0,
  deniedWh: 0,
  meanEfficiencyPct: 97,
  fell: [{ fromW: 0, toW: 500, wh: 2500 }],
  onePointWh: 25,
}

const report = (name: string, learnedPct: number, change: Partial<TrackerReport> = {}): TrackerReport => ({
  name,
  maxW: 500,
  inputV: 60,
  outputV: 110,
  inputW: [0, 500],
  bench: curve(97, 0.8),
  learned: curve(learnedPct, 0.5),
  terms: [],
  benchTold: null,
  readings: [READING],
  day: DAY,
  ...change,
})

const said = (...items: TrackerReport[]): string => spoken(trackersSentence({ uses: 'learned', items, work: null }))

describe('the sentence over the trackers', () => {
  it('names the one that the readings put furthest under its bench, and what that costs', () => {
    // 3 points of 25 Wh each are 75 Wh, printed to 10.
    expect(said(report('Nose', 96), report('Tail', 94))).toBe(
      'Look at the Tail first: 3.0 points under its bench curve, 80\u202fWh over the day.',
    )
  })

  it('calls for nothing while the band still holds the bench', () => {
    expect(said(report('Nose', 96.6), report('Tail', 97.4))).toMatch(/^All trackers are on their curves/)
    expect(offBench(report('Tail', 96.5))).toBe(0)
    expect(offBench(report('Tail', 96.4))).toBeCloseTo(-0.6, 9)
  })

  it('does not blame a tracker that is better than its bench', () => {
    expect(said(report('Nose', 98))).toBe('No tracker is under its bench curve: nothing to do.')
  })

  it('rests on no reading that was set aside or does not count', () => {
    const aside = [
      { ...READING, isSetAside: true },
      { ...READING, counts: false, verdict: 'far-off' as const },
    ]
    expect(said(report('Tail', 94, { readings: aside }))).toBe('No reading counts yet: the bench curves stand.')
  })
})

describe('a tracker over the day', () => {
  it('is weighed by where the energy fell', () => {
    const sloping = report('Tail', 97, {
      learned: { efficiencyPct: [90, 100], lowPct: [89, 99], highPct: [91, 101] },
      day: {
        ...DAY,
        fell: [
          { fromW: 0, toW: 100, wh: 300 },
          { fromW: 400, toW: 500, wh: 100 },
        ],
      },
    })
    // 91 % at 50 W three times, 99 % at 450 W once: (3 · 91 + 99)/4 = 93.
    expect(overDay(sloping, 'learned')?.efficiencyPct).toBeCloseTo(93, 9)
    expect(overDay(report('Tail', 97, { day: null }), 'learned')).toBeNull()
  })

  it('stands in few words, with the terms that nothing tells named', () => {
    expect(standingOf(report('Tail', 94))).toBe('3.0 points under its bench curve by 1 reading')
    expect(standingOf(report('Tail', 97, { readings: [] }))).toBe('Bench curve; no reading counts yet')
    const term = (name: string, isIdentified: boolean) => ({
      name,
      unit: 'W',
      value: 1,
      sd: 1,
      benchValue: 1,
      benchSd: 1,
      isIdentified,
    })
    const terms = [term('Standing', true), term('Conduction', false), term('Rectifier', false)]
    expect(untold(report('Tail', 97, { terms }))).toBe(
      'Not told by the readings, as on the bench: Conduction, Rectifier.',
    )
  })
})

describe('the history', () => {
  const all = { uses: 'learned' as const, items: [report('Tail', 96)], work: null }
  const move = {
    date: '2026-10-17',
    cause: 'reading' as const,
    readingId: READING.reading.id,
    closingWhBefore: 2100,
    closingWhAfter: 2069.4,
    movedAt: '2026-10-17T12:00:01Z',
  }

  it('says which reading moved the close, by how much and to where', () => {
    expect(moveText(move, all)).toBe('Reading, Tail: \u221231\u202fWh to 2\u202f069\u202fWh at close.')
  })

  it('begins with the first choice, which moved nothing', () => {
    expect(moveText({ ...move, cause: 'choice', readingId: null, closingWhBefore: null }, all)).toBe(
      'Choice: to 2\u202f069\u202fWh at close.',
    )
  })

  it('tells of a choice that was taken back', () => {
    expect(moveText({ ...move, cause: 'choice', readingId: null, closingWhAfter: null }, all)).toBe(
      'Choice taken back: nothing is followed.',
    )
  })
})
