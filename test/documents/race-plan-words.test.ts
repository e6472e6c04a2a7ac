import { describe, expect, test } from 'vitest'
import { closeText, drivenText, hoursText } from '../../server/documents/race-plan-words.ts'

const held = { lackJ: -720, lateS: 0, isFinished: true, arrivalMs: 0, reachedM: 568_000 }
const night = {
  kind: 'found' as const,
  wanted: { wh: 2500, chargePct: 50 },
  closing: { wh: 2500, chargePct: 50 },
  costMin: null,
  freePct: null,
  eveningSPerWh: 1.8,
  morningSPerWh: 1.79,
}
const of = { isLast: false, reservePct: 12 }

describe('what a night’s charge does, in words', () => {
  test('says that a found one gains nothing either way where prices are the same', () => {
    expect(closeText(night, of)).toBe(
      'Found: 50 %. A watt-hour saves 1.8 s on this day and 1.8 s on the next: the same, so carrying more or less over this night gains nothing.',
    )
  })

  test('names the limit where they are not', () => {
    expect(closeText({ ...night, closing: { wh: 5000, chargePct: 99 }, morningSPerWh: 2.4 }, of)).toMatch(
      /^Found: 99 %\..* 2\.4 s on the next, but a full pack carries no more over this night\.$/,
    )
    expect(closeText({ ...night, closing: { wh: 610, chargePct: 12.2 }, morningSPerWh: 1.2 }, of)).toMatch(
      /but the reserve allows no less over this night\.$/,
    )
  })

  test('says so where energy holds nobody back', () => {
    expect(closeText({ ...night, eveningSPerWh: 0, morningSPerWh: 0.01 }, of)).toBe(
      'Found: 50 %. Energy holds neither day back.',
    )
  })

  test.each([
    [1.2, 'it costs 1 min 12 s against 87 %, which this night would have if it were free.'],
    [73, 'it costs 1 h 13 min against 87 %, which this night would have if it were free.'],
  ])('tells what a given one costs: %s min', (costMin, words) => {
    expect(closeText({ ...night, kind: 'race', costMin, freePct: 87 }, of)).toBe(`Fixed by the race at 50 %: ${words}`)
  })

  test('tells of one that costs nothing, and of one whose cost is not known', () => {
    expect(closeText({ ...night, kind: 'order', costMin: 0.01, freePct: 50 }, of)).toBe(
      'Fixed by this order at 50 %: it costs nothing.',
    )
    expect(closeText({ ...night, kind: 'race' }, of)).toMatch(
      /What that costs is not known: a day beside it has no plan/,
    )
  })

  test('compares the last close with the reserve', () => {
    const last = { ...of, isLast: true }
    expect(closeText({ ...night, kind: 'race', costMin: 3, freePct: 12 }, last)).toBe(
      'Fixed by the race at 50 %: it costs 3 min against the reserve.',
    )
    const reserve = { wh: 600, chargePct: 12 }
    expect(closeText({ ...night, kind: 'reserve', wanted: reserve, closing: reserve }, last)).toBe(
      'The last day may use everything down to the reserve.',
    )
    expect(closeText({ ...night, kind: 'reserve', wanted: reserve }, last)).toBe(
      'The last day closes with 50 %, over the reserve: energy does not hold it back.',
    )
  })
})

describe('a driven day in words', () => {
  const on = { date: '2026-10-17', finish: 'Blue Gate', at: '16:05', drivingMin: 470.4, closingPct: 40.01 }

  test('says where, when, after how long and with what', () => {
    expect(drivenText(on, held)).toBe('Sat 17 Oct: Blue Gate 16:05 after 7 h 50 min, closing with 40 %.')
  })

  test('says what is missing where no forecast was found to hold', () => {
    expect(drivenText(on, { ...held, lackJ: 43_600 })).toBe(
      'Sat 17 Oct: No speeds were found that keep all that is wanted; the closest reach Blue Gate 16:05, 13 Wh short of what is wanted.',
    )
  })
})

test.each([
  [43.8, '44 min'],
  [59.6, '1 h 00 min'],
  [995.9, '16 h 36 min'],
])('%s minutes are %s', (min, words) => expect(hoursText(min)).toBe(words))
