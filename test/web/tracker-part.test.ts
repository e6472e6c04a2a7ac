import { describe, expect, it } from 'vitest'
import { windowPlot } from '../../web/charts/window-paths.ts'
import type { PartOfDay, TrackerDayWork, TrackerWork } from '../../web/crew-types.ts'
import { spoken } from '../../web/sentence.ts'
import {
  edgeTexts,
  hatchText,
  minutesText,
  outsideMinutes,
  outsideWh,
  partText,
  worthText,
} from '../../web/tracker-part.ts'
import { trackersSentence } from '../../web/tracker-words.ts'

const THIN = '\u202f'

const EDGE = { limit: 'input-low', label: 'below its lowest input voltage', effect: 'string held off its best point' }

const part = (change: Partial<PartOfDay> = {}): PartOfDay => ({
  kind: 'day',
  name: 'whole day',
  from: '2026-10-17T06:00:00+02:00',
  to: '2026-10-17T18:00:00+02:00',
  bestWh: 2050,
  inputWh: 2000,
  lossWh: 60,
  takenPct: 97.5,
  edges: [{ ...EDGE, minutes: 95.4, deniedWh: 23.6 }],
  meanEfficiencyPct: 97,
  europeanPct: 96.9,
  californianPct: 97.1,
  meanInputV: 42,
  meanPackV: 112,
  onePointWh: 20,
  onePointMin: 0.55,
  ...change,
})

/** Five instants an hour apart from 06:00 at 24 V under 110 V; the third and fourth at an edge, the first at rest. */
const HOURS = [6, 7, 8, 9, 10].map((h) => Date.UTC(2026, 9, 17, h - 2))
const tracker = (change: Partial<TrackerWork> = {}): TrackerWork => ({
  name: 'Tail',
  string: 'tail string',
  isDead: false,
  ratedW: 500,
  lowestV: 28,
  highestV: 90,
  leastRiseV: 4,
  standbyWh: 0,
  parts: [
    part(),
    part({ kind: 'stop', name: 'Twin Wells', from: '2026-10-17T08:00:00+02:00', to: '2026-10-17T09:00:00+02:00' }),
  ],
  path: {
    atMs: HOURS,
    inputV: [0, 40, 28, 28, 41],
    packV: [110, 111, 112, 113, 114],
    inputW: [0, 100, 90, 90, 100],
    limit: ['', '', 'input-low', 'input-low', ''],
  },
  ifDead: { wh: 1900, min: 52 },
  ...change,
})

describe('a part of a tracker’s day in words', () => {
  it('has a name and its hours', () => {
    expect(partText(part())).toBe('Whole day')
    expect(partText(part({ kind: 'drive', name: 'Saltpan to Twin Wells' }))).toBe('Saltpan to Twin Wells, 06:00–18:00')
    expect(partText(part({ kind: 'stop', name: 'Twin Wells' }))).toBe('Twin Wells stop, 06:00–18:00')
    expect(partText(part({ kind: 'evening-charge', name: 'Blue Gate' }))).toBe('Evening charge, 06:00–18:00')
  })

  it('says each edge with its time and its cost; a full pack is no edge of the window', () => {
    const full = { limit: 'full', label: 'pack full', effect: 'held back', minutes: 30, deniedWh: 200 }
    const both = part({ edges: [...part().edges, full] })
    expect(outsideMinutes(both)).toBe(95.4)
    expect(outsideWh(both)).toBe(23.6)
    expect(edgeTexts(both)).toEqual([
      `Below its lowest input voltage: string held off its best point, 95${THIN}min, 24${THIN}Wh`,
      `Pack full: held back, 30${THIN}min, 200${THIN}Wh`,
    ])
  })

  it('prints short times with a tenth', () => {
    expect([0.04, 0.55, 9.94, 9.96, 95.4].map(minutesText)).toEqual(['0', '0.6', '9.9', '10', '95'])
  })

  it('gives a worth in seconds, from a minute on in minutes', () => {
    expect([0.03, 0.55, 1.04, 47.2].map(worthText)).toEqual([
      `2${THIN}s`,
      `33${THIN}s`,
      `1.0${THIN}min`,
      `47${THIN}min`,
    ])
  })

  it('says what the hatch is', () => {
    expect(hatchText(tracker())).toBe(
      `Volts of pack and string. Hatched: less than 4${THIN}V below the pack, or outside 28–90${THIN}V.`,
    )
    expect(hatchText(tracker({ leastRiseV: 0 }))).toBe(
      `Volts of pack and string. Hatched: above the pack, or outside 28–90${THIN}V.`,
    )
  })
})

describe('the sentence over the trackers', () => {
  const said = (work: TrackerDayWork): string => spoken(trackersSentence({ uses: 'learned', items: [], work }))
  const day = (...trackers: TrackerWork[]): TrackerDayWork => ({
    date: '2026-10-17',
    zone: 'Africa/Windhoek',
    utcOffsetMin: 120,
    price: { whPerMin: 36, how: 'By hand.' },
    trackers,
  })

  it('names the window that costs most', () => {
    const less = tracker({ name: 'Nose', parts: [part({ edges: [{ ...EDGE, minutes: 300, deniedWh: 11 }] })] })
    expect(said(day(less, tracker()))).toBe(
      `The Tail is outside its window for 95${THIN}min of the day: 24${THIN}Wh denied.`,
    )
  })

  it('passes over less than 10 Wh', () => {
    const little = tracker({ parts: [part({ edges: [{ ...EDGE, minutes: 300, deniedWh: 9 }] })] })
    expect(said(day(little))).toBe('No reading counts yet: the bench curves stand.')
  })
})

describe('the window of a tracker, drawn', () => {
  const plot = windowPlot({ width: 400, work: tracker(), part: part(), utcOffsetMin: 120 })
  if (plot === null) throw new Error('no plot')

  it('marks the time at an edge from half way before to half way behind', () => {
    // From 07:00 at 34 px to 10:00 at 398 px; at the edge from 07:30 to 09:30.
    expect(plot.outside).toHaveLength(1)
    expect(plot.outside[0].x).toBeCloseTo(34 + 364 / 6, 6)
    expect(plot.outside[0].width).toBeCloseTo((364 * 2) / 3, 6)
  })

  it('shows the stop as a block and local times', () => {
    expect(plot.stops).toHaveLength(1)
    expect(plot.stops[0].x).toBeCloseTo(34 + 364 / 3, 6)
    expect(plot.stops[0].width).toBeCloseTo(364 / 3, 6)
    expect(plot.timeTicks.map(({ text }) => text)).toEqual(['07:00', '07:30', '08:00', '08:30', '09:00', '09:30'])
  })

  it('hatches below the lowest voltage where the string comes near it', () => {
    expect(plot.below).not.toBe('')
    const far = windowPlot({ width: 400, work: tracker({ lowestV: 5 }), part: part(), utcOffsetMin: 120 })
    expect(far?.below).toBe('')
  })

  it('of a part without light is none', () => {
    const night = part({ from: '2026-10-17T04:00:00+02:00', to: '2026-10-17T06:30:00+02:00' })
    expect(windowPlot({ width: 400, work: tracker(), part: night, utcOffsetMin: 120 })).toBeNull()
  })
})
