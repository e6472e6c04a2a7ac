import { describe, expect, test } from 'vitest'
import type { DayBudget } from '../../server/documents/budget.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import type { BudgetDocument } from '../../server/documents/budget.ts'
import { instantMs, localIso } from '../../server/documents/local-time.ts'
import { InputError } from '../../server/engine/input-error.ts'
import { someCar, someRace, someRoute, someSky } from '../support/scenario.ts'

interface Request {
  car: ReturnType<typeof someCar>
  race: ReturnType<typeof someRace>
  routes: Record<string, ReturnType<typeof someRoute>>
  sky: ReturnType<typeof someSky>
  speeds: unknown
  date?: string
}

/** The budget of the usual scenario after a change. */
function budget(change: (request: Request) => void = () => undefined): BudgetDocument {
  const request: Request = {
    car: someCar(),
    race: someRace(),
    routes: { road: someRoute(200, 200) },
    sky: someSky(),
    speeds: { kind: 'constant', speedKmh: 75 },
  }
  change(request)
  const { document, problems } = checkDocument(forecastRequest, request)
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return forecastDocuments(document)
}

const oneDay = (change?: (request: Request) => void): DayBudget => budget(change).days[0]

/** The fault that a request ends in. */
function fault(change: (request: Request) => void): InputError {
  try {
    budget(change)
  } catch (error) {
    if (error instanceof InputError) return error
    throw error
  }
  throw new Error('no fault')
}

/** A second day, with the first cut short. */
function twoDays(request: Request): void {
  const [day] = request.race.days
  day.driving = { from: '08:00', to: '09:30' }
  request.race.days.push({ ...day, date: '2026-10-18', driving: { from: '08:00', to: '17:00' }, stages: [] })
  const [place] = request.sky.places
  const stretch = <T>(column: T[]): T[] => [...column, ...column]
  place.at = [...place.at, ...place.at.map((at) => at.replace('10-17', '10-18'))]
  // Six hours between stamps at most: one more in the night.
  place.at.splice(15, 0, '2026-10-18T00:00:00+02:00')
  const night = <T>(column: T[] | undefined): T[] => {
    const twice = stretch(column ?? [])
    twice.splice(15, 0, twice[0])
    return twice
  }
  place.cloudPct = night(place.cloudPct)
  place.airTempC = night(place.airTempC)
  place.windMps = night(place.windMps)
  place.windFromDeg = night(place.windFromDeg)
}

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

describe('speeds', () => {
  test('the car holds the speed asked for, and the limit where that is lower', () => {
    const day = oneDay((r) => {
      r.routes.road.stretches = [{ fromKm: 50, toKm: 60, limitKmh: 40 }]
    })
    const at = (km: number) =>
      day.series.speedKmh[day.series.km.findIndex((k, i) => k > km && day.series.speedKmh[i] > 0)]
    expect(at(20)).toBeCloseTo(75, 6)
    expect(at(55)).toBeCloseTo(40, 6)
    expect(at(70)).toBeCloseTo(75, 6)
  })

  test('a stretch may also allow more than the rest of the road', () => {
    const day = oneDay((r) => {
      r.routes.road.limitKmh = 60
      r.routes.road.stretches = [{ fromKm: 50, toKm: 60, limitKmh: 100 }]
    })
    expect(new Set(day.series.speedKmh)).toEqual(new Set([0, 60, 75]))
  })

  test('sections have speeds of their own', () => {
    const day = oneDay((r) => {
      r.speeds = {
        kind: 'sections',
        speedKmh: 70,
        sections: [{ stage: 'first', fromKm: 100, toKm: 150, speedKmh: 90 }],
      }
    })
    const hours = 50 / 90 + (day.drivenKm - 50) / 70
    expect((Date.parse(day.stages[0].arriveAt) - Date.parse(day.stages[0].departAt)) / 3_600_000).toBeCloseTo(hours, 3)
  })

  test('a section shorter than a piece of road is driven at its own speed to the metre', () => {
    const { series } = oneDay((r) => {
      r.speeds = {
        kind: 'sections',
        speedKmh: 70,
        sections: [{ stage: 'first', fromKm: 20.35, toKm: 20.45, speedKmh: 30 }],
      }
    })
    const slow = series.speedKmh.flatMap((kmh, i) => (kmh === 30 ? [i] : []))
    expect(slow).toHaveLength(1)
    expect(series.km[slow[0] - 1]).toBeCloseTo(20.35, 3)
    expect(series.km[slow[0]]).toBeCloseTo(20.45, 3)
  })

  test('the fastest speed that meets the target is found: one more misses it', () => {
    const found = oneDay((r) => {
      r.race.days[0].targetPct = 85
      r.speeds = { kind: 'meet-target' }
    })
    expect(found.outcome.kind).toBe('done')
    expect(found.targetMarginWh).toBeGreaterThanOrEqual(0)
    const more = oneDay((r) => {
      r.race.days[0].targetPct = 85
      r.speeds = { kind: 'constant', speedKmh: (found.heldKmh ?? 0) + 1 }
    })
    expect(more.targetMarginWh).toBeLessThan(0)
  })

  test('where no speed meets the target the closest is shown with what it misses', () => {
    const day = oneDay((r) => {
      r.race.openingPct = 20
      r.race.days[0].targetPct = 100
      r.race.days[0].charging = []
      r.speeds = { kind: 'meet-target', lowestKmh: 50, highestKmh: 90 }
    })
    expect(day.outcome.kind).toBe('no-speed-meets-target')
    expect(day.outcome.text).toMatch(/Closest: \d+ km\/h, \d+ Wh short/)
  })

  test('a motor too weak for the hill slows the car there and nowhere else', () => {
    const weak = oneDay((r) => {
      r.car.drive.motorMaxW = 1100
      r.routes.road = someRoute(200, 800)
    })
    const driving = weak.series.speedKmh.filter((v) => v > 0)
    expect(Math.min(...driving)).toBeLessThan(70)
    expect(Math.max(...driving)).toBeCloseTo(75, 6)
  })
})

describe('the day ends in words', () => {
  const kinds = (change: (r: Request) => void) => oneDay(change).outcome

  test('done', () => {
    expect(kinds(() => undefined)).toMatchObject({
      kind: 'done',
      text: expect.stringMatching(/^Twin Wells is reached 1\d:\d\d\.$/),
    })
  })

  test('cut off by the clock', () => {
    const outcome = kinds((r) => void (r.race.days[0].driving = { from: '08:00', to: '09:00' }))
    expect(outcome).toMatchObject({
      kind: 'cut-off',
      text: 'The driving hours end at km 75, 125 km before Twin Wells.',
    })
  })

  test('below the reserve', () => {
    const outcome = kinds((r) => {
      r.race.openingPct = 12
      r.race.days[0].charging = []
      r.sky = someSky(90)
    })
    expect(outcome.kind).toMatch(/below-reserve|runs-flat/)
  })

  test('flat, with the energy that is missing', () => {
    const day = oneDay((r) => {
      r.race.openingPct = 5
      r.race.days[0].charging = []
      r.sky = someSky(100)
      r.speeds = { kind: 'constant', speedKmh: 110 }
    })
    expect(day.outcome).toMatchObject({
      kind: 'runs-flat',
      text: expect.stringMatching(/runs flat at km \d+, \d\d:\d\d/),
    })
    expect(day.ledger.shortWh).toBeGreaterThan(100)
  })

  test('late at a stop, with its penalty', () => {
    const day = oneDay((r) => {
      const [stage] = r.race.days[0].stages ?? []
      stage.stop = { minutes: 30, closesAt: '10:00' }
      r.race.penalties = { lateMinPerMin: 2 }
    })
    const lateMin = (Date.parse(day.stages[0].arriveAt) - Date.parse('2026-10-17T10:00:00+02:00')) / 60_000
    expect(day.outcome.kind).toBe('stop-missed')
    expect(day.penaltyMin).toBeCloseTo(2 * lateMin, 1)
  })

  test('a grade that the motor cannot climb', () => {
    const outcome = kinds((r) => {
      r.car.drive.motorMaxNm = 4
      r.routes.road = someRoute(50, 1500)
    })
    expect(outcome.kind).toBe('too-steep')
    expect(outcome.text).toMatch(/grade there is \d+\.\d %/)
    expect(outcome.at).toMatch(/T08:\d\d:\d\d/)
  })
})

describe('cars and days out of the ordinary', () => {
  test('a car without a stand charges with its array flat', () => {
    const flat = oneDay((r) => void delete r.car.stand)
    expect(new Set(flat.series.tiltDeg)).toEqual(new Set([0]))
    expect(flat.ledger.income[0].wh).toBeGreaterThan(0)
    expect(flat.ledger.income[0].wh).toBeLessThan(oneDay().ledger.income[0].wh)
  })

  test('a stop that the end of the day cuts in two is left on the next morning only', () => {
    const { days } = budget((r) => {
      twoDays(r)
      r.race.days[0].driving = { from: '08:00', to: '10:50' }
    })
    expect(days[0].gates.map((g) => g.kind)).toEqual(['dawn', 'start', 'arrive', 'camp', 'dusk'])
    expect(days[0].stages[0].departsNextAt).toBeNull()
    expect(days[1].gates.map((g) => g.kind)).toEqual(['dawn', 'depart', 'dusk'])
  })
})

describe('from day to day', () => {
  test('a leg that the clock cuts off goes on the next morning with the battery of the evening', () => {
    const { days } = budget(twoDays)
    expect(days).toHaveLength(2)
    expect(days[0].outcome.kind).toBe('cut-off')
    expect(days[1].stages[0]).toMatchObject({ id: 'first', isFinished: true, fromKm: 0 })
    expect(days[0].drivenKm + days[1].drivenKm).toBeCloseTo(budget(twoDays).lengthKm, 6)
    expect(days[1].opening.wh).toBeCloseTo(days[0].closing.wh, 9)
  })

  test('a measured opening charge replaces the one carried over', () => {
    const { days } = budget((r) => {
      twoDays(r)
      r.race.days[1].openingPct = 33
    })
    expect(days[1].opening.chargePct).toBeCloseTo(33, 9)
  })

  test('one day alone is the same as that day among all', () => {
    const alone = budget((r) => {
      twoDays(r)
      r.date = '2026-10-18'
    })
    expect(alone.days).toEqual([budget(twoDays).days[1]])
  })
})

describe('figures that belong together', () => {
  const day = oneDay()

  test('the gates carry the balance of the series at their times', () => {
    expect(day.gates.map((g) => g.kind)).toEqual(['dawn', 'start', 'arrive', 'depart', 'dusk'])
    for (const gate of day.gates.slice(1)) {
      const i = day.series.toMs.findLastIndex((ms) => ms <= Date.parse(gate.at) + 1000)
      expect(Math.abs(day.series.wh[i] - gate.wh)).toBeLessThan(12)
    }
  })

  test('what the trackers took is the income, what they lost is their line', () => {
    const sum = (values: number[]) => values.reduce((a, b) => a + b, 0)
    expect(sum(day.trackers.map((t) => t.inputWh))).toBeCloseTo(day.ledger.cameInWh, 6)
    const line = day.ledger.spendings.find((l) => l.id === 'trackers')
    expect(sum(day.trackers.map((t) => t.lossWh))).toBeCloseTo(line?.wh ?? Number.NaN, 6)
  })

  test('power in and out over the steps gives the ledger’s sums', () => {
    const wh = (watts: number[]) =>
      watts.reduce((sum, w, i) => sum + (w * (day.series.toMs[i] - day.series.fromMs[i])) / 3_600_000, 0)
    expect(wh(day.series.inW)).toBeCloseTo(day.ledger.cameInWh, 0)
    expect(wh(day.series.outW)).toBeCloseTo(day.ledger.wentOutWh, 0)
  })

  test('one brightness of the ground for routes that differ is said', () => {
    const { assumptions } = budget((r) => {
      r.routes.other = { ...r.routes.road, groundAlbedo: 0.4 }
      const [stage] = r.race.days[0].stages ?? []
      r.race.days[0].stages = [stage, { ...stage, id: 'second', route: 'other' }]
    })
    expect(assumptions).toContain('The routes lie in ground of different brightness: its mean is assumed for all.')
  })

  test('what was assumed is said', () => {
    expect(budget().assumptions).toEqual([
      'The sky brings no air pressure: the standard atmosphere is assumed.',
      'The sky brings no humidity: dry air is assumed.',
      'The sky brings no turbidity: Linke 3 is assumed.',
    ])
  })

  test('a headwind from where the car is going costs energy, a tailwind saves it', () => {
    const drag = (fromDeg: number) =>
      oneDay((r) => {
        const [place] = r.sky.places
        place.windMps = place.at.map(() => 6)
        place.windFromDeg = place.at.map(() => fromDeg)
      }).ledger.spendings.find((l) => l.id === 'drag')?.wh ?? Number.NaN
    const calm = day.ledger.spendings.find((l) => l.id === 'drag')?.wh ?? Number.NaN
    expect(drag(0)).toBeGreaterThan(calm * 1.2)
    expect(drag(180)).toBeLessThan(calm * 0.85)
  })

  test('pressure reduced to sea level is brought back to the height of the place', () => {
    const drag = (pressureHpa: number, pressureIs: 'station' | 'sea-level') =>
      oneDay((r) => {
        r.sky.pressureIs = pressureIs
        const [place] = r.sky.places
        place.pressureHpa = place.at.map(() => pressureHpa)
      }).ledger.spendings.find((l) => l.id === 'drag')?.wh ?? Number.NaN
    expect(drag(1013, 'sea-level') / drag(1013, 'station')).toBeCloseTo(0.87, 1)
    expect(drag(1013, 'sea-level') / drag(880, 'station')).toBeCloseTo(1, 1)
  })

  test('an hour’s irradiance counts in the hour that it is said to speak for', () => {
    const morning = (averaging: 'preceding' | 'following') =>
      oneDay((r) => {
        const [place] = r.sky.places
        place.ghiWm2 = place.at.map((at) =>
          Math.max(0, 900 * Math.sin(((Number(at.slice(11, 13)) - 6) / 12) * Math.PI)),
        )
        r.sky.averaging = { ghiWm2: averaging }
      }).ledger.income[0].wh
    expect(morning('following')).not.toBeCloseTo(morning('preceding'), -1)
  })
})
