import { describe, expect, it } from 'vitest'
import {
  ageAmount,
  clock,
  clockAt,
  clockOn,
  dateIn,
  dayText,
  durationText,
  grouped,
  kmText,
  offsetText,
  round10,
  signed,
  slugOf,
  stampText,
  whText,
  zoneOffsetMin,
} from '../../web/format.ts'

// ISO 80000-1: groups of three parted by a thin space; the sign is a minus, not a hyphen.
describe('figures', () => {
  it('thousands stand apart by a thin space and losses carry a true minus', () => {
    expect(grouped(2440)).toBe('2\u202f440')
    expect(grouped(-1_234_567)).toBe('\u22121\u202f234\u202f567')
    expect(grouped(999.6)).toBe('1\u202f000')
    expect(grouped(-0.4)).toBe('0')
    expect([signed(310), signed(-84), signed(0)]).toEqual(['+310', '\u221284', '0'])
  })

  it('Wh are printed to 10 and a zero has no sign', () => {
    expect([2444.9, 2445, -4.9, -5.1].map(round10)).toEqual([2440, 2450, 0, -10])
    expect(Object.is(round10(-4), 0)).toBe(true)
    expect(whText(1344.1)).toBe('1\u202f340')
  })

  it('a time of another zone than the day’s carries its offset', () => {
    expect(clockOn('2026-10-17T14:30:00+10:30', 630)).toBe('14:30')
    expect(clockOn('2026-10-17T14:30:00+10:30', 570)).toBe('14:30\u202fUTC+10:30')
    expect(clockOn('2026-10-17T14:30:00Z', 60)).toBe('14:30\u202fUTC')
  })

  it('short roads have a decimal and long ones have none', () => {
    expect([0.04, 9.94, 9.96, 248.4].map(kmText)).toEqual(['0.0', '9.9', '10', '248'])
  })
})

describe('times', () => {
  it('a clock shows the local time that the instant carries', () => {
    expect(clock('2026-10-17T16:48:20+02:00')).toBe('16:48')
    expect(clock('2026-10-17T16:48:40+02:00')).toBe('16:49')
    expect(clock('2026-10-17T23:59:40+02:00')).toBe('00:00')
    expect(clock('2026-10-17T01:10:00-03:30')).toBe('01:10')
    expect(clockAt(Date.UTC(2026, 9, 17, 23, 0), 120)).toBe('01:00')
  })

  it('the offset is written as people say it', () => {
    expect([120, 0, -210, 345].map(offsetText)).toEqual(['UTC+2', 'UTC', 'UTC\u22123:30', 'UTC+5:45'])
  })

  it('a date is a short day of the week and a stamp keeps its own offset', () => {
    expect(dayText('2026-10-17')).toBe('Sat 17 Oct')
    expect(stampText('2026-10-16T23:30:00-05:00')).toBe('Fri 16 Oct 23:30')
  })

  it('a zone has the offset of that instant, summer time included', () => {
    // tz database: Namibia UTC+2 all year since 2017; Adelaide UTC+9:30, UTC+10:30 in summer.
    expect(zoneOffsetMin('Africa/Windhoek', Date.UTC(2026, 9, 17))).toBe(120)
    expect(zoneOffsetMin('Australia/Adelaide', Date.UTC(2026, 6, 1))).toBe(570)
    expect(zoneOffsetMin('Australia/Adelaide', Date.UTC(2026, 11, 1))).toBe(630)
    expect(zoneOffsetMin('UTC', 0)).toBe(0)
    expect(zoneOffsetMin('Nowhere/Land', 0)).toBe(0)
    expect(dateIn('Australia/Adelaide', Date.UTC(2026, 11, 1, 15))).toBe('2026-12-02')
  })

  it('an age has the unit that fits it', () => {
    const text = (ms: number) => Object.values(ageAmount(ms)).join(' ')
    expect([40e3, 89e3, 52 * 60e3, 6 * 3600e3, 3 * 86400e3].map(text)).toEqual(['40 s', '89 s', '52 min', '6 h', '3 d'])
    expect(durationText(-12.3)).toBe('12\u202fmin')
    expect(durationText(65)).toBe('1\u202fh 05\u202fmin')
  })
})

it('a short name holds small letters, digits and hyphens only', () => {
  expect(slugOf('  Große Straße, 2. Tag! ')).toBe('gro-e-stra-e-2-tag')
  expect(slugOf('Été à Évian')).toBe('ete-a-evian')
  expect(slugOf('x'.repeat(80))).toHaveLength(64)
  expect(slugOf('…')).toBe('')
})
