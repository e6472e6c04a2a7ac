import { describe, expect, it } from 'vitest'
import { speedsDocument } from '../../server/documents/speeds.ts'
import { choiceOf, dayToShow, hashOf, isSame, typedSpeed } from '../../web/choice.ts'
import { legSpeed, ownSpeed, withLeg } from '../../web/legs.ts'

describe('the address of a page', () => {
  it('keeps race, car, sky, day and speeds through a reload', () => {
    const choices = [
      { kind: 'meet-target' as const },
      { kind: 'constant' as const, speedKmh: 78 },
      {
        kind: 'legs' as const,
        speedKmh: 78,
        legs: [
          { stage: 'out', speedKmh: 80 },
          { stage: 'on', speedKmh: 71 },
        ],
      },
    ].map((speeds) => ({
      view: 'day' as const,
      race: 'plateau-run',
      car: 'weaver-2',
      sky: 'forecast-1',
      date: '2026-10-17',
      speeds,
    }))
    for (const choice of choices) expect(choiceOf(hashOf(choice))).toEqual(choice)
  })

  it('that nobody wrote leads to the day and the fastest speed', () => {
    for (const hash of ['', '#', '#/nonsense?kmh=999&date=tomorrow&legs=<b>'])
      expect(choiceOf(hash)).toEqual({
        view: 'day',
        race: '',
        car: '',
        sky: '',
        date: '',
        speeds: { kind: 'meet-target' },
      })
  })

  it('always gives speeds that the service takes', () => {
    for (const hash of ['#/day?kmh=5', '#/day?kmh=200&legs=a:1,b:60,c', '#/day?kmh=4', '#/day?kmh=70&legs=a:70'])
      expect(speedsDocument.safeParse(choiceOf(hash).speeds).success).toBe(true)
  })
})

describe('what the crew follows', () => {
  const sections = [{ stage: 'out', fromKm: 0, toKm: 15, speedKmh: 80 }]
  const shown = {
    view: 'tonight' as const,
    race: 'plateau-run',
    car: 'weaver-2',
    sky: 'forecast-1',
    date: '2026-10-17',
    speeds: { kind: 'sections' as const, speedKmh: 70, sections },
  }
  const followed = {
    carId: 'weaver-2',
    skyId: 'forecast-1',
    speeds: shown.speeds,
    version: 1,
    until: null,
    savedAt: '',
  }

  it('is told apart from the fastest speed and from another plan, however a store orders its fields', () => {
    const turned = [{ toKm: 15, stage: 'out', speedKmh: 80, fromKm: 0 }]
    expect(isSame(shown, { ...followed, speeds: { sections: turned, kind: 'sections', speedKmh: 70 } })).toBe(true)
    const faster = [{ ...sections[0], speedKmh: 81 }]
    expect(isSame(shown, { ...followed, speeds: { ...shown.speeds, sections: faster } })).toBe(false)
    expect(isSame({ ...shown, speeds: { kind: 'meet-target' } }, followed)).toBe(false)
  })

  it('is what an address of a plan leads to: its speeds are too long to stand in it', () => {
    expect(hashOf(shown)).toBe('#/tonight?race=plateau-run&car=weaver-2&sky=forecast-1&date=2026-10-17&speeds=followed')
  })
})

describe('a typed speed', () => {
  it('is a whole number of km/h from 5 to 200, or none yet', () => {
    expect(['78', ' 78 ', '77,6', '4', '201', '', 'x', '7e1'].map(typedSpeed)).toEqual([
      78,
      78,
      78,
      null,
      null,
      null,
      null,
      70,
    ])
  })
})

describe('the day shown first', () => {
  const days = ['2026-10-16', '2026-10-17', '2026-10-18'].map((date) => ({ date, zone: 'Africa/Windhoek' }))
  it('is the one asked for, else today’s at the race, else the next, else the first', () => {
    expect(dayToShow(days, '2026-10-18', 0)).toBe('2026-10-18')
    // 22:30 UTC on the 16th is already the 17th at UTC+2.
    expect(dayToShow(days, '', Date.UTC(2026, 9, 16, 22, 30))).toBe('2026-10-17')
    expect(dayToShow(days, '2026-01-01', Date.UTC(2026, 0, 1))).toBe('2026-10-16')
    expect(dayToShow(days, '', Date.UTC(2027, 0, 1))).toBe('2026-10-16')
    expect(dayToShow([], '', 0)).toBe('')
  })
})

describe('speeds by stage', () => {
  const speeds = { kind: 'legs' as const, speedKmh: 70, legs: [{ stage: 'out', speedKmh: 80 }] }
  it('change one stage and leave the others', () => {
    expect(legSpeed(speeds, 'out')).toBe(80)
    expect(legSpeed(speeds, 'on')).toBe(70)
    expect(withLeg(withLeg(speeds, 'on', 75), 'out', 79).legs).toEqual([
      { stage: 'on', speedKmh: 75 },
      { stage: 'out', speedKmh: 79 },
    ])
  })

  it('start from the speed that was held, else from the mean of the day', () => {
    const stages = [
      { meanKmh: 80, drivenKm: 300 },
      { meanKmh: 60, drivenKm: 100 },
    ]
    expect(ownSpeed({ kind: 'constant', speedKmh: 66 }, 70, stages)).toBe(66)
    expect(ownSpeed({ kind: 'meet-target' }, 71, stages)).toBe(71)
    expect(ownSpeed({ kind: 'meet-target' }, null, stages)).toBe(75)
    expect(ownSpeed({ kind: 'meet-target' }, null, [])).toBe(60)
  })
})
