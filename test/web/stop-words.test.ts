import { describe, expect, it } from 'vitest'
import { pointingDocuments } from '../../server/documents/pointing-day.ts'
import { spoken } from '../../web/sentence.ts'
import {
  compassText,
  costFrom,
  costText,
  firstHold,
  firstToCome,
  isDark,
  NOTHING,
  poseSentence,
  squareText,
  utcText,
  windowNames,
} from '../../web/stop-words.ts'
import { checkedRequest } from '../support/some-budget.ts'

const [day] = pointingDocuments(checkedRequest()).days
const [morning, stop] = day.windows
const bright = morning.holds[8]

describe('the words of the stop screen', () => {
  it('name the windows by what they are, and number what has one name', () => {
    expect(windowNames(day.windows)).toEqual(['Morning', 'Twin Wells', 'Evening'])
    expect(windowNames([morning, morning, stop])).toEqual(['Morning 1', 'Morning 2', 'Twin Wells'])
  })

  it('say what to do so that it can be read aloud', () => {
    const hold = { ...bright, turnToDeg: 83.4, tiltDeg: 41.6 }
    expect(spoken(poseSentence(hold))).toBe('07:22 to 07:32: turn to 83° true, tilt 42°.')
    expect(spoken(poseSentence({ ...hold, tiltDeg: 0.4 }))).toBe('07:22 to 07:32: leave the array flat.')
    const dark = { ...hold, best: { ...hold.best, stringsW: 0.3 } }
    expect(spoken(poseSentence(dark))).toBe('07:22 to 07:32: no light to speak of.')
    expect(compassText(359.7)).toBe('0°')
    expect(compassText(0.2)).toBe('0°')
  })

  it('trust a pen’s shadow only where the best pose is square to the sun', () => {
    expect(squareText({ ...bright, offSunDeg: 1.2 })).toMatch(/throws no shadow/)
    expect(squareText({ ...bright, offSunDeg: 12.4 })).toBe(
      'The best pose is 12° off the sun: go by compass and tilt, not by a pen’s shadow.',
    )
    expect(squareText({ ...bright, best: { ...bright.best, stringsW: 0 } })).toBe('')
  })

  it('open with what is to come, in the light', () => {
    const at = (time: string): number => Date.parse(`2026-10-17T${time}:00+02:00`)
    expect(firstToCome(day.windows, at('05:00'))).toBe(0)
    expect(firstToCome(day.windows, at('08:30'))).toBe(1)
    expect(firstToCome(day.windows, at('23:30'))).toBe(0)
    expect(firstHold(morning.holds, at('07:25'))).toBe(8)
    const dawn = morning.holds.map((hold, i) => (i < 3 ? { ...hold, best: { ...hold.best, stringsW: 0 } } : hold))
    expect(firstHold(dawn, at('05:00'))).toBe(3)
    expect(firstHold(dawn.slice(0, 2), at('05:00'))).toBe(0)
    expect(isDark(dawn[2])).toBe(true)
  })

  it('add up what being off costs from a hold on', () => {
    const pick = ({ off }: (typeof morning.holds)[number]) => off[1]
    const all = costFrom(morning, 0, pick)
    expect(all.costPackWh).toBeCloseTo(morning.total.off[1].costPackWh, 6)
    expect(all.costHarvestWh).toBeCloseTo(morning.total.off[1].costHarvestWh, 6)
    const last = costFrom(morning, morning.holds.length - 1, pick)
    expect(last.costPackWh).toBeCloseTo(pick(morning.holds[morning.holds.length - 1]).costPackWh, 9)
    expect(costFrom(morning, 8, pick).costW).toBe(pick(bright).costW)
    expect(costFrom(morning, 4, pick).costPackWh).toBeLessThan(all.costPackWh)
  })

  it('never print a gain as a cost', () => {
    expect(costText(-0.7)).toBe('0')
    expect(costText(12.4)).toBe('12')
  })

  it('give local time with UTC beside it, and a reason for every empty day', () => {
    expect(utcText('2026-10-17T15:05:00+02:00')).toBe('13:05\u202fUTC')
    // Rounded as the local time beside it is.
    expect(utcText('2026-10-17T15:05:40+02:00')).toBe('13:06\u202fUTC')
    for (const text of Object.values(NOTHING)) expect(text).toMatch(/\.$/)
    expect(Object.keys(NOTHING).sort()).toEqual(['never-lifted', 'no-stand', 'nothing-lifts'])
  })
})
