import { describe, expect, it } from 'vitest'
import {
  arrivalRange,
  chanceText,
  flatText,
  lengthText,
  limitText,
  mergedSections,
  meritTexts,
  nearestPct,
  priceRuns,
  priceText,
  steadySections,
  steadyText,
  tight,
  touchPlace,
  typedPct,
  whRange,
} from '../../web/plan-words.ts'
import { samplePlan } from './sample-plan.ts'

const plain = (text: string): string => text.replaceAll('\u202f', ' ')
const plan = samplePlan()
const { ranges } = plan
if (ranges === null) throw new Error('the sample has ranges')

describe('the words of a plan', () => {
  it('count a chance in a hundred, never as certain and never as none', () => {
    expect([0, 0.4, 0.6, 3.9, 50, 99.4, 99.6, 100].map(chanceText)).toEqual([
      'under 1 in 100',
      'under 1 in 100',
      '1 in 100',
      '4 in 100',
      '50 in 100',
      '99 in 100',
      'over 99 in 100',
      'over 99 in 100',
    ])
  })

  it('give a length of time as it is said aloud', () => {
    const texts = [0.07, 1, 99 / 60, 9.99, 21.48, 59.9, 65].map((minutes) => plain(lengthText(minutes)))
    expect(texts).toEqual(['4 s', '1 min', '1 min 39 s', '9 min 59 s', '21 min', '1 h 00 min', '1 h 05 min'])
  })

  it('say how far the plan is from the best, from one speed and from the bound, which is rounded up', () => {
    expect(meritTexts(plan).map(plain)).toEqual([
      'Speeds for people arrive 1 min later than the best speeds found.',
      // 4 min later than the best less the 1 min of the speeds for people.
      'That is 3 min earlier than the fastest constant speed, 76 km/h.',
      'No plan can be more than 1 min 37 s earlier than the best.',
    ])
    const none = samplePlan({ constant: null, bound: { arriveAt: '', withinMin: 0 } })
    expect(meritTexts(none).map(plain)).toEqual([
      'Speeds for people arrive 1 min later than the best speeds found.',
      'No plan can be more than 1 s earlier than the best.',
      'No constant speed meets the target.',
    ])
  })

  it('give the price of energy where it changes, and what a known loss costs', () => {
    const runs = priceRuns(plan.prices)
    expect(runs).toEqual([
      { fromKm: 0, sPerWh: 1.65 },
      { fromKm: 20, sPerWh: 2.4 },
    ])
    // 60 × 1.65 s = 99 s.
    expect(plain(priceText(runs[0]))).toMatch(/^A watt-hour saves 1\.[67] s; 60 Wh cost 1 min 39 s\.$/)
    expect(priceText({ fromKm: 0, sPerWh: 0.01 })).toMatch(/saves no time/)
    const limit = { what: 'target' as const, label: 'Charge wanted at the close' }
    expect([0, 0.005, 21.48].map((costMin) => plain(limitText({ ...limit, costMin })))).toEqual([
      'nothing',
      'nothing',
      '21 min',
    ])
  })

  it('give ranges with their place: arrival by the clock, the reserve by its gate', () => {
    expect(arrivalRange(plan.forPeople.arriveAt, ranges)).toEqual({ earliest: '13:48', latest: '14:25' })
    expect(plain(whRange({ p10: 1234.9, p90: 2529 }))).toBe('1 230–2 530')
    expect(whRange({ p10: -50, p90: 640 })).toBe('below 0 to 640')
    expect(whRange({ p10: -500, p90: -40 })).toBe('below 0')
    expect(whRange({ p10: 2, p90: 640 })).toBe('0–640')
    expect(flatText(ranges)).toBeNull()
    const [first, ...others] = ranges.gates
    const low = { ...ranges, gates: [first, ...others.map((gate) => ({ ...gate, wh: { ...gate.wh, p10: -20 } }))] }
    expect(flatText(low)).toBe(
      'Below 0: on 1 day in 10, or more, these speeds empty the battery before Twin Wells; drive slower then.',
    )
    expect(flatText({ ...ranges, closingWh: { p10: -1, p50: 5, p90: 9 } })).toContain('before the close')
    expect(touchPlace(ranges)).toBe('most often at Blue Gate, km 400')
    expect(touchPlace({ ...ranges, touchesMostKm: 312 })).toBe('most often near km 312')
    expect(touchPlace({ ...ranges, touchesMostKm: null })).toBe('nowhere on the days drawn')
  })

  it('keep figures beside their units', () => {
    expect(tight('closes with 73 % at most: 1173 Wh short, 97 s earlier, 16:04 sharp')).toBe(
      'closes with 73\u202f% at most: 1173\u202fWh short, 97\u202fs earlier, 16:04 sharp',
    )
  })
})

describe('speeds for people', () => {
  it('are one line where neighbours of a stage are equal', () => {
    expect(mergedSections(plan.forPeople.sections)).toEqual([
      { stage: 'Stage 1', fromKm: 0, toKm: 200, speedKmh: 80 },
      { stage: 'Stage 2', fromKm: 200, toKm: 400, speedKmh: 80 },
    ])
    expect(mergedSections([])).toEqual([])
  })

  it('are whole km/h by the kilometre of a stage where they are the steady ones', () => {
    expect(mergedSections(steadySections(plan))).toEqual([
      { stage: 'Stage 1', fromKm: 0, toKm: 200, speedKmh: 78 },
      { stage: 'Stage 2', fromKm: 0, toKm: 200, speedKmh: 78 },
    ])
    expect(steadySections(samplePlan({ steady: null }))).toEqual([])
  })
})

describe('the steady plan', () => {
  it('is offered with its price where the plan touches the reserve more often than promised', () => {
    const { text, isOffered } = steadyText(plan)
    expect(isOffered).toBe(true)
    expect(plain(text)).toBe('To touch the reserve at most 2 in 100, arrive 14:07, 8 min 30 s later than the best.')
  })

  it('is not offered where the promise is kept already, or where there is none', () => {
    expect(steadyText(samplePlan({ ranges: { ...ranges, touchesReservePct: 1.2 } })).isOffered).toBe(false)
    expect(steadyText(samplePlan({ steady: null })).isOffered).toBe(false)
  })
})

describe('a typed target', () => {
  it('is a share of charge, the race’s where nothing is typed, or not readable', () => {
    expect(['', ' ', '0', '37,5', '100', '101', '-1', 'x'].map(typedPct)).toEqual([
      null,
      null,
      0,
      37.5,
      100,
      undefined,
      undefined,
      undefined,
    ])
  })

  it('that is the nearest possible one is rounded down', () => {
    expect([73.46, 73, 0.4].map(nearestPct)).toEqual([73, 73, 0])
  })
})
