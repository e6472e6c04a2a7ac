import { describe, expect, test } from 'vitest'
import { instantMs, localIso } from '../../server/documents/local-time.ts'
import { fault } from '../support/some-budget.ts'
import type { Request } from '../support/some-budget.ts'

describe('documents that do not fit together are refused by field', () => {
  test.each<[string, (r: Request) => void, string, string]>([
    [
      'a stage on a route that is not given',
      (r) => void (r.routes = {}),
      'unknown-route',
      'race.days[0].stages[0].route',
    ],
    [
      'a stage longer than its route',
      (r) => void (r.race.days[0].stages = [{ ...(r.race.days[0].stages ?? [])[0], toKm: 300 }]),
      'off-the-route',
      'race.days[0].stages[0].toKm',
    ],
    [
      'a stretch beyond the end of the route',
      (r) => void (r.routes.road.stretches = [{ fromKm: 500, toKm: 600 }]),
      'off-the-route',
      'routes.road.stretches[0].fromKm',
    ],
    [
      'a sky that ends at noon',
      (r) => {
        const [place] = r.sky.places
        for (const name of ['at', 'cloudPct', 'airTempC', 'windMps', 'windFromDeg'] as const) place[name]?.splice(8)
      },
      'sky-too-short',
      'sky.places',
    ],
    [
      'land rougher than the car is high',
      (r) => void (r.routes.road.roughnessM = 1),
      'out-of-range',
      'routes.road.roughnessM',
    ],
    [
      'a leg of a stage that there is not',
      (r) => void (r.speeds = { kind: 'legs', speedKmh: 70, legs: [{ stage: 'second', speedKmh: 80 }] }),
      'unknown-stage',
      'speeds.legs[0].stage',
    ],
    [
      'a section beyond its stage',
      (r) =>
        void (r.speeds = {
          kind: 'sections',
          speedKmh: 70,
          sections: [{ stage: 'first', fromKm: 250, toKm: 300, speedKmh: 80 }],
        }),
      'off-the-stage',
      'speeds.sections[0].fromKm',
    ],
    [
      'a route whose points are all one place',
      (r) => void (r.routes.road.points = { latDeg: [-23, -23], lonDeg: [17, 17] }),
      'too-short',
      'routes.road.points',
    ],
    [
      'a stage of less than a metre',
      (r) => void (r.race.days[0].stages = [{ ...(r.race.days[0].stages ?? [])[0], toKm: 0.0009 }]),
      'too-short',
      'race.days[0].stages[0].toKm',
    ],
    [
      'a day that would open in an hour that the clocks skip',
      (r) => {
        r.race.zone = 'Europe/Berlin'
        r.race.days[0].date = '2026-03-29'
        r.race.days[0].release = undefined
        r.race.days[0].charging = [{ from: '02:30', to: '07:00' }]
      },
      'no-such-time',
      'race.days[0].charging[0].from',
    ],
    [
      'air damper than any',
      (r) => {
        const [place] = r.sky.places
        place.humidityPct = place.at.map(() => 100)
        place.airTempC = place.at.map((_, i) => (i === 3 ? 56 : 20))
      },
      'out-of-range',
      'sky.places[0].humidityPct[3]',
    ],
    [
      'a sea-level pressure that leaves no air at the height of the place',
      (r) => {
        r.sky.pressureIs = 'sea-level'
        const [place] = r.sky.places
        place.elevationM = 9000
        place.pressureHpa = place.at.map(() => 700)
      },
      'out-of-range',
      'sky.places[0].pressureHpa[0]',
    ],
    ['a day that there is not', (r) => void (r.date = '2026-10-20'), 'unknown-date', 'date'],
  ])('%s', (_name, change, code, field) => {
    expect(fault(change)).toMatchObject({ code, field })
    expect(fault(change).detail).toMatch(/expected|skip/)
  })
})

describe('local time', () => {
  test('is read in the zone of the race and shown with its offset', () => {
    const atMs = instantMs('2026-10-17', '08:00', 'Africa/Windhoek', 'x')
    expect(atMs).toBe(Date.UTC(2026, 9, 17, 6))
    expect(localIso(atMs, 'Africa/Windhoek')).toBe('2026-10-17T08:00:00+02:00')
  })

  // Central European clocks: 29 March 2026 02:00 → 03:00, 25 October 2026 03:00 → 02:00 (directive 2000/84/EC)
  test('an hour that the clocks skip is refused', () => {
    expect(() => instantMs('2026-03-29', '02:30', 'Europe/Berlin', 'days[0].release')).toThrow(/days\[0\]\.release/)
    expect(instantMs('2026-03-29', '03:00', 'Europe/Berlin', 'x')).toBe(Date.UTC(2026, 2, 29, 1))
  })

  // Samoa moved over the date line: 30 December 2011 did not exist there (IANA time zone database, Pacific/Apia)
  test('a day that the clocks skip is refused', () => {
    expect(() => instantMs('2011-12-30', '12:00', 'Pacific/Apia', 'x')).toThrow(/skip it on 2011-12-30/)
  })

  test('an hour that comes twice is taken the first time', () => {
    expect(instantMs('2026-10-25', '02:30', 'Europe/Berlin', 'x')).toBe(Date.UTC(2026, 9, 25, 0, 30))
  })
})
