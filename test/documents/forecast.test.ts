import { describe, expect, test } from 'vitest'
import { someRoute, someSky } from '../support/scenario.ts'
import { budget, oneDay, twoDays } from '../support/some-budget.ts'
import type { Request } from '../support/some-budget.ts'

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
    // Starting, braking and the changes between have the mean of their ends.
    expect(new Set(day.series.speedKmh)).toEqual(new Set([0, 60, 75, 30, 67.5]))
  })

  test('sections have speeds of their own', () => {
    const day = oneDay((r) => {
      r.speeds = {
        kind: 'sections',
        speedKmh: 70,
        sections: [{ stage: 'first', fromKm: 100, toKm: 150, speedKmh: 90 }],
      }
    })
    // At 0.6 and 1 m/s², against a change at once: from and to rest v/1.2 + v/2, to 90 and back Δv²/(1.2 · v) + Δv²/(2 · v).
    const [slow, fast] = [70 / 3.6, 90 / 3.6]
    const lostS = slow / 1.2 + slow / 2 + (fast - slow) ** 2 * (1 / (1.2 * fast) + 1 / (2 * fast))
    const hours = 50 / 90 + (day.drivenKm - 50) / 70 + lostS / 3600
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

  test('where no speed is in time the least late is shown', () => {
    const day = oneDay((r) => {
      const [stage] = r.race.days[0].stages ?? []
      stage.stop = { minutes: 30, closesAt: '09:00' }
      r.speeds = { kind: 'meet-target', lowestKmh: 60, highestKmh: 64 }
    })
    expect(day.outcome.text).toBe('No speed meets the day’s target. Closest: 64 km/h, late at a stop.')
    expect(day.speedsTried).toBe(5)
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
    // 75 km/h for an hour, less 27.8 s of starting and braking: 74.4 km
    expect(outcome).toMatchObject({
      kind: 'cut-off',
      text: 'The driving hours end at km 74, 126 km before Twin Wells.',
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

  test('one day alone is the same as that day among all, where the days before meet their targets', () => {
    const fastest = { kind: 'meet-target' }
    const alone = budget((r) => {
      twoDays(r)
      r.date = '2026-10-18'
      r.speeds = fastest
    })
    const all = budget((r) => {
      twoDays(r)
      r.speeds = fastest
    })
    expect(alone.days).toEqual([all.days[1]])
  })

  test('a speed tried for one day does not change the days before', () => {
    const opening = (speedKmh: number) =>
      budget((r) => {
        twoDays(r)
        r.date = '2026-10-18'
        r.speeds = { kind: 'constant', speedKmh }
      }).days[0].opening.wh
    expect(opening(90)).toBe(opening(50))
  })

  test('with a measured charge a day can be planned by a sky that does not reach the days before', () => {
    const request = (openingPct?: number) => (r: Request) => {
      r.race.days.unshift({ ...r.race.days[0], date: '2026-10-16', stages: [] })
      r.race.days[1].openingPct = openingPct
      r.date = '2026-10-17'
    }
    expect(() => budget(request())).toThrow(/^sky.places: the sky covers/)
    const alone = budget(request(44))
    expect(alone.days[0].opening.chargePct).toBeCloseTo(44, 9)
    expect(alone.assumptions).toContain('The sky does not reach the days before: their stages are taken as driven.')
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

  test('roads that do not meet are said, and the stop between them is in the sun of the first', () => {
    const { assumptions, days } = budget((r) => {
      const [stage] = r.race.days[0].stages ?? []
      const { points } = someRoute(20)
      r.routes.far = { ...someRoute(20), points: { ...points, latDeg: points.latDeg.map((lat) => lat + 100) } }
      r.race.days[0].stages = [stage, { ...stage, id: 'second', name: 'North', route: 'far' }]
    })
    expect(assumptions).toContainEqual(
      expect.stringMatching(
        /^North starts 1\d{4} km from the end of Saltpan to Twin Wells: the car is brought there\.$/,
      ),
    )
    const first = oneDay().ledger.income.find((l) => l.id === 'stop:first')
    expect(days[0].ledger.income.find((l) => l.id === 'stop:first')?.wh).toBeCloseTo(first?.wh ?? Number.NaN, 6)
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
