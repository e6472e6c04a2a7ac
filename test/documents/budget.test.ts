import { describe, expect, test } from 'vitest'
import type { DayBudget } from '../../server/documents/budget.ts'
import { someSky } from '../support/scenario.ts'
import { budget, oneDay, twoDays } from '../support/some-budget.ts'
import type { Request } from '../support/some-budget.ts'

const lineWh = (lines: { id: string; wh: number }[], id: string): number =>
  lines.find((l) => l.id === id)?.wh ?? Number.NaN

const spentWh = (day: DayBudget, id: string): number => lineWh(day.ledger.spendings, id)

/** Dull weather in which the pack has room and every string stays in its window. */
const dull = (r: Request): void => {
  r.sky = someSky(85)
  r.race.days[0].charging = []
}

describe('sun that was not taken stands beside the ledger', () => {
  test('what the search for the best point misses', () => {
    const missed = (trackingPct: number) => {
      const day = oneDay((r) => {
        dull(r)
        for (const tracker of r.car.trackers) tracker.trackingPct = trackingPct
      })
      return lineWh(day.ledger.denied, 'tracking') / (day.ledger.cameInWh + lineWh(day.ledger.denied, 'tracking'))
    }
    expect(missed(95)).toBeCloseTo(0.05, 6)
    expect(missed(100)).toBeCloseTo(0, 9)
  })

  test('what a full pack has no room for, by tracker too', () => {
    const day = oneDay((r) => void (r.race.openingPct = 100))
    const full = day.trackers.flatMap((t) => t.limits.filter((l) => l.limit === 'full'))
    expect(lineWh(day.ledger.denied, 'full')).toBeGreaterThan(500)
    expect(full.reduce((sum, l) => sum + l.deniedWh, 0)).toBeCloseTo(lineWh(day.ledger.denied, 'full'), 6)
    const series = day.series.deniedW.reduce(
      (sum, w, i) => sum + (w * (day.series.toMs[i] - day.series.fromMs[i])) / 3_600_000,
      0,
    )
    const denied = lineWh(day.ledger.denied, 'full') + lineWh(day.ledger.denied, 'window')
    expect(series / denied).toBeCloseTo(1, 3)
  })
})

describe('spendings', () => {
  test('auxiliaries draw one power on the road and another when parked', () => {
    const day = oneDay(dull)
    const drivingH = (Date.parse(day.stages[0].arriveAt) - Date.parse(day.stages[0].departAt)) / 3_600_000
    expect(spentWh(day, 'auxiliaries')).toBeCloseTo(30 * drivingH + 6 * (13 - drivingH), 1)
  })

  test('a stage’s arrival stands between its opening and its closing, before the stop’s sun', () => {
    const [stage] = oneDay().stages
    const stopWh = lineWh(stage.ledger.income, 'stop:first')
    expect(stage.closing.wh - stage.arrival.wh).toBeGreaterThan(0.8 * stopWh)
    expect(stage.closing.wh - stage.arrival.wh).toBeLessThan(stopWh)
  })

  test('the pack’s voltage is its rested one less the drop under load', () => {
    const { series } = oneDay(dull)
    // 60 % of charge: 3.76 V a cell, 30 in series, 6 W of auxiliaries over 0.116 Ω drop 6 mV
    expect(series.packV[0]).toBeCloseTo(112.8 - 0.006, 1)
    const driving = series.speedKmh.findIndex((v) => v > 0)
    expect(series.packV[driving]).toBeLessThan(112.5)
    expect(series.packV[driving]).toBeGreaterThan(110)
  })

  test('downhill with a full pack the brakes take what regeneration cannot store', () => {
    const down = (openingPct: number) =>
      oneDay((r) => {
        dull(r)
        r.race.openingPct = openingPct
        const { points } = r.routes.road
        points.elevationM = points.latDeg.map((_, i) => 9000 - 40 * Math.min(i, 200))
      })
    const full = down(100)
    expect(spentWh(full, 'brakes')).toBeGreaterThan(spentWh(down(30), 'brakes') + 200)
    const { openingWh, cameInWh, shortWh, wentOutWh, closingWh } = full.ledger
    expect(openingWh + cameInWh + shortWh - wentOutWh).toBeCloseTo(closingWh, 6)
  })

  test('the margin is what the lowest balance leaves above the reserve', () => {
    const day = oneDay(dull)
    expect(day.marginWh).toBeCloseTo(Math.min(...day.series.wh) - day.reserve.wh, 1)
    expect(day.lowest.chargePct).toBeCloseTo(Math.min(...day.series.chargePct), 2)
  })

  test('brighter ground lights the lifted array more', () => {
    const morning = (albedo: number) =>
      lineWh(oneDay((r) => void (r.routes.road.groundAlbedo = albedo)).ledger.income, 'morning-charge')
    expect(morning(0.6)).toBeGreaterThan(1.02 * morning(0.1))
  })
})

describe('penalties', () => {
  const short = (r: Request): void => {
    twoDays(r)
    r.race.days[1].driving = { from: '08:00', to: '09:00' }
    r.race.penalties = { unfinishedMinPerKm: 3 }
  }

  test('road not driven counts on the last day only', () => {
    const { days, lengthKm } = budget(short)
    expect(days[0].penaltyMin).toBe(0)
    expect(days[1].penaltyMin).toBeCloseTo(3 * (lengthKm - days[0].drivenKm - days[1].drivenKm), 9)
  })

  test('an arrival within what is still counted is late but not missed', () => {
    const kind = (mostLateMin: number) =>
      oneDay((r) => {
        const [stage] = r.race.days[0].stages ?? []
        stage.stop = { minutes: 30, closesAt: '10:00' }
        r.race.penalties = { lateMinPerMin: 1, mostLateMin }
      }).outcome.kind
    expect(kind(60)).toBe('done')
    expect(kind(30)).toBe('stop-missed')
  })
})

describe('speeds by day and by target', () => {
  test('a leg’s speed on one date holds on that date', () => {
    const { days } = budget((r) => {
      twoDays(r)
      r.speeds = { kind: 'legs', speedKmh: 60, legs: [{ stage: 'first', date: '2026-10-18', speedKmh: 80 }] }
    })
    expect(days.map((d) => Math.round(d.stages[0].meanKmh))).toEqual([60, 80])
  })

  test('a higher target is met at a lower speed', () => {
    const heldKmh = (targetPct: number | undefined) =>
      oneDay((r) => {
        dull(r)
        r.race.days[0].targetPct = targetPct
        r.speeds = { kind: 'meet-target' }
      }).heldKmh ?? Number.NaN
    expect(heldKmh(40)).toBeLessThan(heldKmh(undefined))
  })

  test('no speed is taken that sinks below the reserve on the way, though the evening’s sun would make it up', () => {
    const day = oneDay((r) => {
      r.race.openingPct = 45
      r.race.days[0].charging = [{ from: '12:00', to: '18:30' }]
      r.race.days[0].targetPct = 20
      r.car.pack.reservePct = 30
      r.speeds = { kind: 'meet-target' }
    })
    expect(day.marginWh).toBeGreaterThanOrEqual(0)
    expect(day.targetMarginWh).toBeGreaterThan(500)
  })

  test('speeds above every limit on the road are tried once', () => {
    const day = oneDay((r) => {
      r.routes.road.limitKmh = 60
      r.speeds = { kind: 'meet-target' }
    })
    expect(day).toMatchObject({ heldKmh: 60, speedsTried: 1 })
  })
})

describe('a sky with gaps and other columns', () => {
  test('a missing value is bridged from its neighbours, not taken for nought', () => {
    const charge = (cloud: number | null) =>
      oneDay((r) => {
        const [place] = r.sky.places
        place.cloudPct = place.at.map((_, i) => (i === 6 ? cloud : 80))
      }).ledger.cameInWh
    expect(charge(null) / charge(80)).toBeCloseTo(1, 3)
    expect(charge(0) / charge(80)).toBeGreaterThan(1.02)
  })

  test('dew point and humidity say the same of the air', () => {
    const drag = (humidityPct: number | null, dewPointC: number | null) =>
      spentWh(
        oneDay((r) => {
          const [place] = r.sky.places
          place.airTempC = place.at.map(() => 30)
          if (humidityPct !== null) place.humidityPct = place.at.map(() => humidityPct)
          if (dewPointC !== null) place.dewPointC = place.at.map(() => dewPointC)
        }),
        'drag',
      )
    // 30 °C at 50 % has its dew point at 18.4 °C (Magnus formula)
    expect(drag(50, null) / drag(null, 18.4)).toBeCloseTo(1, 4)
    expect(drag(100, null) / drag(0, null)).toBeCloseTo(0.982, 2)
  })
})
