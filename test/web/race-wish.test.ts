import { describe, expect, it } from 'vitest'
import { closeOptions, datesIn, NO_WISH, type RaceWish, wantedBy, wishOf } from '../../web/race-wish.ts'

const [FRI, SAT, SUN] = ['2026-10-16', '2026-10-17', '2026-10-18']
const days = [
  { date: FRI, targetPct: 82 },
  { date: SAT, targetPct: 40 },
  { date: SUN, targetPct: null },
]

describe('what the form orders', () => {
  it('is the race as it stands where nothing is typed', () => {
    expect(wantedBy(NO_WISH, days)).toEqual({ nights: [] })
    expect(wantedBy({ ...NO_WISH, fromDate: FRI, toDate: SUN }, days)).toEqual({ nights: [] })
  })

  it('holds days, opening and nights, and comes back as it was typed', () => {
    const wish: RaceWish = {
      fromDate: SAT,
      toDate: SUN,
      openingText: '71,5',
      nights: {
        [FRI]: { kind: 'free', text: '' },
        [SAT]: { kind: 'fixed', text: '55' },
        [SUN]: { kind: 'free', text: '' },
      },
    }
    const wanted = wantedBy(wish, days)
    expect(wanted).toEqual({
      fromDate: SAT,
      openingPct: 71.5,
      nights: [
        { date: SAT, kind: 'fixed', chargePct: 55 },
        { date: SUN, kind: 'free' },
      ],
    })
    if (wanted === null) throw new Error('it is an order')
    expect(wantedBy(wishOf(wanted), days)).toEqual(wanted)
  })

  it.each([
    ['a charge over a full pack', { nights: { [SAT]: { kind: 'fixed' as const, text: '101' } } }],
    ['no charge where one is to be fixed', { nights: { [SAT]: { kind: 'fixed' as const, text: '' } } }],
    ['an opening that is no number', { openingText: 'half' }],
    ['a last day before the first', { fromDate: SUN, toDate: FRI }],
  ])('is nothing with %s', (_, more) => expect(wantedBy({ ...NO_WISH, ...more }, days)).toBeNull())

  it('is of the days between the first and the last', () => {
    expect(datesIn({ ...NO_WISH, toDate: SAT }, days).map(({ date }) => date)).toEqual([FRI, SAT])
  })

  it('offers to free a night only where the race gives its charge', () => {
    const keys = (day: (typeof days)[number]): string[] => closeOptions(day, false).map(([key]) => key)
    expect(keys(days[0])).toEqual(['race', 'free', 'fixed'])
    expect(keys(days[2])).toEqual(['race', 'fixed'])
    expect(closeOptions(days[2], true)[0][1]).toBe('As the race: the reserve')
  })
})
