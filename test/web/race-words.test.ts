import { describe, expect, it } from 'vitest'
import {
  chosenOn,
  costsText,
  finishText,
  held,
  isDear,
  isDriven,
  kindText,
  otherCloses,
  raceChartText,
} from '../../web/race-words.ts'
import { givenClose, sampleRace, sampleRaceDay } from './sample-race.ts'

const plain = (text: string): string => text.replace(/[\u202f\u00a0]/g, ' ')
const [SAT, SUN] = ['2026-10-17', '2026-10-18']

describe('the words of a race plan', () => {
  it('tell what given charges cost, each alone, and what is not known', () => {
    const costs = (...closes: ReturnType<typeof givenClose>[]): string =>
      plain(costsText(sampleRace([SAT, SUN].map((date, d) => sampleRaceDay(date, closes[d] ?? {})))))
    expect(costs()).toBe('Every night closes with the charge that was found.')
    expect(costs(givenClose())).toBe('Given charges cost time: Sat 17 Oct 1 min 12 s.')
    expect(costs(givenClose(), givenClose({ costMin: 0.5 }))).toBe(
      'Given charges cost time: Sat 17 Oct 1 min 12 s, Sun 18 Oct 30 s, each alone.',
    )
    const five = [1, 2, 3, 4, 5].map((min) => sampleRaceDay(`2026-10-1${min}`, givenClose({ costMin: min })))
    expect(plain(costsText(sampleRace(five)))).toBe('Given charges cost time on 5 days: 5 min at most, each alone.')
    expect(costs(givenClose({ costMin: 0.01 }))).toBe('Given charges cost no time.')
    expect(costs(givenClose(), givenClose({ costMin: null }))).toMatch(/12 s\. Of some it is not known\.$/)
  })

  it('name a close by how it came about, with what was wanted where the day leaves more', () => {
    const kind = (more: object): string => plain(kindText(sampleRaceDay(SAT, givenClose(more))))
    expect(kind({})).toBe('given')
    expect(kind({ wanted: { wh: 750, chargePct: 15 } })).toBe('given 15 %')
    expect(kind({ kind: 'found', wanted: { wh: 750, chargePct: 15 } })).toBe('found')
    expect(kind({ kind: 'reserve', wanted: { wh: 600, chargePct: 12 } })).toBe('over reserve')
    expect(kind({ kind: 'reserve' })).toBe('reserve')
  })

  it('offer to free a charge only where that gains a second', () => {
    expect(isDear(sampleRaceDay(SAT, givenClose({ costMin: 1 / 60 })))).toBe(true)
    expect(isDear(sampleRaceDay(SAT, givenClose({ costMin: 0.9 / 60 })))).toBe(false)
    expect(isDear(sampleRaceDay(SAT))).toBe(false)
  })

  it('keep figures beside their units and dates in one line', () => {
    expect(held('Blue Gate is reached on Sun 18 Oct at 16:17: 16 h 36 min on the road, 1 min 12 s, 82 %.')).toBe(
      'Blue Gate is reached on Sun\u00a018\u00a0Oct at 16:17: 16\u202fh\u00a036\u202fmin on the road, 1\u202fmin\u00a012\u202fs, 82\u202f%.',
    )
  })

  it('name the finish by the last day that is driven', () => {
    const parked = sampleRaceDay(SUN, { state: 'parked', road: null })
    expect(finishText(sampleRace([sampleRaceDay(SAT), parked]))).toEqual({ at: '16:05', note: 'Blue Gate, Sat 17 Oct' })
    expect(finishText(sampleRace([parked]))).toBeNull()
  })

  it('let the crew follow a day to its end, or to its camp', () => {
    const of = { carId: 'weaver-2', skyId: 'friday' }
    const driven = sampleRaceDay(SAT)
    const until = { stage: 'out', km: 320 }
    const camp = sampleRaceDay(SUN, { state: 'camp', camp: { until, leftKm: 248 } })
    expect([driven, camp].filter(isDriven).map((day) => chosenOn(day, of))).toEqual([
      { ...of, speeds: driven.road?.speeds, until: null },
      { ...of, speeds: camp.road?.speeds, until },
    ])
  })

  it('list the charges that the race says otherwise, or not at all', () => {
    const plan = sampleRace()
    const race = (targetPct: number | null) => [SAT, SUN].map((date) => ({ date, targetPct }))
    expect(otherCloses(plan, race(50.3))).toEqual([])
    expect(otherCloses(plan, race(40))).toEqual([SAT, SUN].map((date) => ({ date, planPct: 50, racePct: 40 })))
    expect(otherCloses(plan, race(null)).map(({ racePct }) => racePct)).toEqual([null, null])
    const given = sampleRace([sampleRaceDay(SAT, givenClose()), sampleRaceDay(SUN, givenClose({ kind: 'reserve' }))])
    expect(otherCloses(given, race(40))).toEqual([])
  })

  it('tell the chart to those who do not see it', () => {
    expect(plain(raceChartText(sampleRace()))).toBe(
      'Battery over the days and nights: Sat 17 Oct closes with 2 500 watt hours, found; Sun 18 Oct closes with 2 500 watt hours, found. Reserve 600 watt hours. The same as a table follows.',
    )
  })
})
