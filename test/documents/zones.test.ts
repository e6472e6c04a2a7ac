import { describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { localClock } from '../../server/documents/local-clock.ts'
import { instantMs, localIso } from '../../server/documents/local-time.ts'
import { dayRules, stageRules } from '../../server/documents/race-model.ts'
import { raceDocument, type RaceInput } from '../../server/documents/race.ts'
import { someRace } from '../support/scenario.ts'
import { budget, oneDay, type Request } from '../support/some-budget.ts'

// Offsets and changes of the clock: IANA time zone database (from memory), and worked by hand from them.
const utc = (text: string) => Date.parse(`${text}Z`)
const at = (date: string, time: string, zone: string) => instantMs(date, time, zone, 'field')

describe('a local time where the clock changes', () => {
  test('that comes twice is taken the first time', () => {
    // Berlin, 25 October 2026: 03:00 at UTC+2 becomes 02:00 at UTC+1.
    expect(at('2026-10-25', '02:30', 'Europe/Berlin')).toBe(utc('2026-10-25T00:30'))
    expect(at('2026-10-25', '01:59', 'Europe/Berlin')).toBe(utc('2026-10-24T23:59'))
    expect(at('2026-10-25', '03:00', 'Europe/Berlin')).toBe(utc('2026-10-25T02:00'))
    // Lord Howe, 5 April 2026: 02:00 at UTC+11 becomes 01:30 at UTC+10:30.
    expect(at('2026-04-05', '01:45', 'Australia/Lord_Howe')).toBe(utc('2026-04-04T14:45'))
    expect(at('2026-04-05', '02:00', 'Australia/Lord_Howe')).toBe(utc('2026-04-04T15:30'))
  })
  test('that never comes is refused', () => {
    const skipped = 'the clocks of Europe/Berlin skip it on 2026-03-29'
    expect(() => at('2026-03-29', '02:30', 'Europe/Berlin')).toThrow(skipped)
    expect(() => at('2026-10-04', '02:15', 'Australia/Lord_Howe')).toThrow('skip it')
    expect(() => at('2018-11-04', '00:30', 'America/Sao_Paulo')).toThrow('skip it')
    expect(at('2026-03-29', '03:00:05', 'Europe/Berlin')).toBe(utc('2026-03-29T01:00:05'))
  })
  test('is as on every other day where no clock changes', () => {
    for (const date of ['2026-10-17', '2026-10-18', '2026-11-01'])
      expect(at(date, '08:15', 'America/Sao_Paulo')).toBe(utc(`${date}T11:15`))
    expect(localIso(utc('2026-10-18T11:15'), 'America/Sao_Paulo')).toBe('2026-10-18T08:15:00-03:00')
  })
  test('is told again by the clock that it came from', () => {
    const { hourOf, dateOf } = localClock('Europe/Berlin')
    expect([hourOf(utc('2026-10-25T00:30')), hourOf(utc('2026-10-25T01:30'))]).toEqual([2, 2])
    expect([dateOf(utc('2026-10-24T21:59')), dateOf(utc('2026-10-24T22:00'))]).toEqual(['2026-10-24', '2026-10-25'])
  })
})

describe('race days around a change of the clock', () => {
  const inBerlin = (change: (race: RaceInput) => void = () => undefined) => {
    const race = { ...someRace(), zone: 'Europe/Berlin' }
    const [day] = race.days
    race.days = [
      { ...day, date: '2026-10-24' },
      { ...day, date: '2026-10-25', stages: [] },
    ]
    change(race)
    return dayRules(raceDocument.parse(race))
  }
  test('keep their local hours, and the night between is an hour longer', () => {
    const [saturday, sunday] = inBerlin()
    expect(saturday.drivingFromMs).toBe(utc('2026-10-24T06:00'))
    expect(sunday.drivingFromMs).toBe(utc('2026-10-25T07:00'))
    expect(saturday.closesMs).toBe(utc('2026-10-24T17:00'))
    // 19:00 to 06:00 is 11 h on any other night.
    expect(sunday.opensMs - saturday.closesMs).toBe(12 * 3_600_000)
  })
  test('are an hour longer where the clock changes in them', () => {
    const [, sunday] = inBerlin((race) => {
      Object.assign(race.days[1], { release: '00:30', driving: { from: '01:00', to: '04:00' }, charging: [] })
    })
    expect(sunday.drivingToMs - sunday.drivingFromMs).toBe(4 * 3_600_000)
  })
})

/** Two stages on Darwin's clock (UTC+9:30, never changed), the stop between them perhaps on another. */
function stagesInDarwin(race: RaceInput, zone: string | undefined, stop: object): void {
  race.zone = 'Australia/Darwin'
  const [first, second] = [
    { id: 'first', name: 'One', start: 'Saltpan', finish: 'Gate', toKm: 60, stop: { minutes: 30, zone, ...stop } },
    { id: 'second', name: 'Two', start: 'Gate', finish: 'Wells', fromKm: 60, toKm: 120 },
  ]
  race.days[0].stages = [
    { ...first, route: 'road' },
    { ...second, route: 'road' },
  ]
}

/** The usual day moved to 134° east, with these stages. */
function inDarwin(zone: string | undefined, stop: object = {}) {
  return ({ race, routes, sky }: Request): void => {
    stagesInDarwin(race, zone, stop)
    routes.road.points.lonDeg = routes.road.points.lonDeg.map(() => 134)
    const [place] = sky.places
    sky.places[0] = { ...place, lonDeg: 134, at: place.at.map((stamp) => stamp.replace('+02:00', '+09:30')) }
  }
}

describe('a stop in another zone than the day’s', () => {
  test('has its hours in its own zone', () => {
    // Adelaide keeps summer time from 4 October 2026: UTC+10:30.
    const race = someRace()
    stagesInDarwin(race, 'Australia/Adelaide', { opensAt: '10:00', closesAt: '12:00' })
    const [{ stop }, second] = stageRules(raceDocument.parse(race))
    expect([...(stop?.opensMs ?? [])]).toEqual([utc('2026-10-16T23:30')])
    expect([...(stop?.closesMs ?? [])]).toEqual([utc('2026-10-17T01:30')])
    expect(second.stop).toBeNull()
  })
  test('prints its times with its offset, and so does the road from there', () => {
    const day = oneDay(inDarwin('Australia/Adelaide'))
    const offsets = (texts: string[]) => texts.map((text) => text.slice(-6))
    expect(day.utcOffsetMin).toBe(570)
    expect(day.gates.map(({ kind, name, at: when }) => [kind, name, when.slice(-6)])).toEqual([
      ['dawn', 'Saltpan', '+09:30'],
      ['start', 'Saltpan', '+09:30'],
      ['arrive', 'Gate', '+10:30'],
      ['depart', 'Gate', '+10:30'],
      ['finish', 'Wells', '+09:30'],
      ['dusk', 'Wells', '+09:30'],
    ])
    const [first, second] = day.stages
    expect(offsets([first.departAt, first.arriveAt, first.departsNextAt ?? ''])).toEqual(['+09:30', '+10:30', '+10:30'])
    expect(offsets([second.departAt, second.arriveAt])).toEqual(['+10:30', '+09:30'])
    const drives = day.spans.filter(({ kind }) => kind === 'drive')
    expect(drives.map(({ from, to }) => offsets([from, to]))).toEqual([
      ['+09:30', '+10:30'],
      ['+10:30', '+09:30'],
    ])
  })
  test('changes no instant, only how it is written', () => {
    const plain = oneDay(inDarwin(undefined))
    const there = oneDay(inDarwin('Australia/Brisbane'))
    const instants = (day: typeof plain) => day.gates.map((gate) => Date.parse(gate.at))
    expect(instants(there)).toEqual(instants(plain))
    expect(there.closing).toEqual(plain.closing)
    // Darwin to Brisbane: half an hour.
    expect(there.gates[2].at).toContain('+10:00')
  })
  test('lets an early car go when it opens there', () => {
    // 10:30 in Adelaide is 09:30 in Darwin; 60 km from 08:00 at 75 km/h take 48 min, so the car is early.
    const day = oneDay(inDarwin('Australia/Adelaide', { opensAt: '10:30', clockStarts: 'at-opening' }))
    expect(day.stages[0].departsNextAt).toBe('2026-10-17T11:00:00+10:30')
    expect(Date.parse(day.stages[0].departsNextAt ?? '')).toBe(utc('2026-10-17T00:30'))
  })
  test('is said in the outcome with its offset', () => {
    const late = oneDay(inDarwin('Australia/Adelaide', { closesAt: '09:30' })).outcome
    expect(late.kind).toBe('stop-missed')
    expect(late.text).toMatch(/^Gate is reached 09:4\d \(UTC\+10:30\), 1\d min after it closes\.$/)
    expect(late.at).toContain('+10:30')
  })
  test('keeps its zone at the finish by a stop of no length', () => {
    const day = oneDay((r) => {
      inDarwin('Australia/Adelaide')(r)
      ;(r.race.days[0].stages ?? [])[1].stop = { minutes: 0, zone: 'Australia/Adelaide' }
    })
    expect(day.gates.slice(-2).map(({ kind, at: when }) => [kind, when.slice(-6)])).toEqual([
      ['finish', '+10:30'],
      ['dusk', '+10:30'],
    ])
    expect(day.outcome.text).toContain('(UTC+10:30)')
  })
  test('is the zone of a camp on the road from it, and of what is left of it the next morning', () => {
    const ending = (at: string) => (r: Request) => {
      inDarwin('Australia/Adelaide')(r)
      r.race.days[0].driving = { from: '08:00', to: at }
      r.race.days.push({ ...r.race.days[0], date: '2026-10-18', stages: [], driving: { from: '08:00', to: '17:00' } })
      const [place] = r.sky.places
      const twice = <T>(values?: T[]) => [...(values ?? []), ...(values ?? []).slice(0, 1), ...(values ?? [])]
      const next = place.at.map((stamp) => stamp.replace('10-17', '10-18'))
      const night = '2026-10-18T00:00:00+09:30'
      r.sky.places[0] = {
        ...place,
        at: [...place.at, night, ...next],
        cloudPct: twice(place.cloudPct),
        airTempC: twice(place.airTempC),
        windMps: twice(place.windMps),
        windFromDeg: twice(place.windFromDeg),
      }
    }
    const endings = (at: string) =>
      budget(ending(at)).days.map(({ gates }) => gates.map(({ kind, at: when }) => `${kind} ${when.slice(-6)}`))
    // The stop is reached near 08:50 and left near 09:20, by Darwin's clock.
    expect(endings('09:40')[0]).toEqual([
      'dawn +09:30',
      'start +09:30',
      'arrive +10:30',
      'depart +10:30',
      'camp +10:30',
      'dusk +10:30',
    ])
    const [, morning] = endings('09:05')
    expect(morning.slice(0, 3)).toEqual(['dawn +09:30', 'depart +10:30', 'start +10:30'])
  })
  test('is a zone that there is', () => {
    const race = someRace()
    Object.assign((race.days[0].stages ?? [])[0], { stop: { minutes: 30, zone: 'Plateau' } })
    expect(checkDocument(raceDocument, race).problems?.[0]).toMatchObject({
      field: 'days[0].stages[0].stop.zone',
      value: '"Plateau"',
    })
  })
})

describe('penalties by hand', () => {
  /** Arrival at the end of 200 km from 08:00 at 75 km/h, in minutes after 10:00. */
  const lateMin = (day: { stages: { arriveAt: string }[] }) =>
    (Date.parse(day.stages[0].arriveAt) - utc('2026-10-17T08:00')) / 60_000
  const arriving = (stop: object, penalties: RaceInput['penalties']) =>
    oneDay((r) => {
      ;(r.race.days[0].stages ?? [])[0].stop = { minutes: 30, ...stop }
      r.race.penalties = penalties
    })

  test('minutes that are free cost nothing, and the rest has a cap', () => {
    const late = (penalties: RaceInput['penalties']) =>
      arriving({ closesAt: '10:00' }, { lateMinPerMin: 2, ...penalties })
    const min = lateMin(late({}))
    expect(min).toBeGreaterThan(35)
    // Stamps are to the second, which is worth less than 0.02 min here.
    expect(late({}).penaltyMin).toBeCloseTo(2 * min, 1)
    expect(late({ lateFreeMin: 10 }).penaltyMin).toBeCloseTo(2 * (min - 10), 1)
    expect(late({ lateFreeMin: 10, mostLatePenaltyMin: 25 }).penaltyMin).toBe(25)
    expect(late({ lateFreeMin: 100 }).penaltyMin).toBe(0)
  })
  test('a stop is missed beyond its free minutes, where nothing else is said', () => {
    const kind = (penalties: RaceInput['penalties']) => arriving({ closesAt: '10:00' }, penalties).outcome.kind
    expect(kind({ lateFreeMin: 60 })).toBe('done')
    expect(kind({ lateFreeMin: 10 })).toBe('stop-missed')
    expect(kind({ lateFreeMin: 10, mostLateMin: 60 })).toBe('done')
  })
  test('a car that comes before a stop opens may pay for it, and waits', () => {
    const early = arriving({ opensAt: '11:30' }, { earlyMinPerMin: 0.5 })
    expect(early.penaltyMin).toBeCloseTo((90 - lateMin(early)) / 2, 1)
    expect(early.stages[0].departsNextAt).toBe('2026-10-17T11:30:00+02:00')
    expect(arriving({ opensAt: '11:30' }, {}).penaltyMin).toBe(0)
  })
})

describe('a night under lock', () => {
  test('begins with the impound and ends with the release', () => {
    const { days } = budget((r) => {
      r.race.days[0].impound = '18:40'
    })
    const { spans } = days[0]
    expect(spans[0].from).toBe('2026-10-17T06:00:00+02:00')
    expect(spans[spans.length - 1].to).toBe('2026-10-17T18:40:00+02:00')
    expect(spans[spans.length - 1].kind).toBe('parked')
  })
  test('lets nothing be charged before or after it', () => {
    const wrong = (change: object) => {
      const race = someRace()
      Object.assign(race.days[0], change)
      return checkDocument(raceDocument, race).problems?.map(({ field }) => field)
    }
    expect(wrong({ impound: '18:00' })).toEqual(['days[0].charging[1].to'])
    expect(wrong({ release: '06:30' })).toEqual(['days[0].charging[0].from'])
  })
})
