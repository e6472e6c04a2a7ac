import { describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { comparisonRequest, type SkyComparison } from '../../server/documents/sky-comparison.ts'
import { compareSkies } from '../../server/documents/sky-comparison-model.ts'
import type { SkyInput } from '../../server/documents/sky.ts'
import { InputError } from '../../server/engine/input-error.ts'
import { someCar, someRace, someRoute, someSky } from '../support/scenario.ts'
import { twoDays } from '../support/some-budget.ts'

interface Request {
  forecast: SkyInput
  measured: SkyInput
  zone?: string
  day?: object
}

/** A clear Saturday forecast beside the same measured, hourly from 05:00 to 19:00, after a change. */
function compared(change: (request: Request) => void = () => undefined): SkyComparison {
  const request: Request = { forecast: someSky(), measured: { ...someSky(), source: 'measured' } }
  change(request)
  const { document, problems } = checkDocument(comparisonRequest, request)
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return compareSkies(document)
}

function fault(change: (request: Request) => void): InputError {
  try {
    compared(change)
  } catch (error) {
    if (error instanceof InputError) return error
    throw error
  }
  throw new Error('no fault')
}

const scoreOf = (scores: SkyComparison['places'][number]['scores'], id: string) =>
  scores.find((score) => score.id === id)

const day = (speeds: object = { kind: 'constant', speedKmh: 60 }) => ({
  car: someCar(),
  race: someRace(),
  routes: { road: someRoute(200, 200) },
  speeds,
  date: '2026-10-17',
})

describe('a forecast beside what was measured', () => {
  test('says place, rows and how far the nearest forecast is', () => {
    const { places, forecast, measured } = compared((r) => {
      r.measured.places[0] = { ...r.measured.places[0], name: 'Gate', latDeg: -23.6 }
    })
    expect(forecast.source).toBe('forecast')
    expect(measured.source).toBe('measured')
    // A tenth of a degree of latitude at 23.5° south is 11.075 km: WGS 84 meridian radius 6,345.4 km (by hand).
    expect(places[0]).toMatchObject({ name: 'Gate', rows: 15, nearest: { name: 'Saltpan' } })
    expect(places[0].nearest.km).toBeCloseTo(11.075, 2)
    expect(places[0].from).toBe('2026-10-17T04:00:00+02:00')
    expect(places[0].to).toBe('2026-10-17T19:00:00+02:00')
  })
  test('counts temperature at its stamps and light over its hours', () => {
    // Measured 1 °C less at 15 stamps, and 3 less at 12:00.
    const { places } = compared((r) => {
      const airTempC = (r.measured.places[0].airTempC ?? []).map((value, i) => (value ?? 0) - (i === 7 ? 3 : 1))
      r.measured.places[0] = { ...r.measured.places[0], airTempC }
    })
    expect(scoreOf(places[0].scores, 'airTempC')).toMatchObject({ rows: 15 })
    expect(scoreOf(places[0].scores, 'airTempC')?.bias).toBeCloseTo(17 / 15, 9)
    expect(scoreOf(places[0].scores, 'airTempC')?.rms).toBeCloseTo(Math.sqrt(23 / 15), 9)
    // Cooler air bends the light a little more.
    expect(scoreOf(places[0].scores, 'ghiWm2')?.rms).toBeLessThan(0.003)
    const hours = places[0].byHour.map(({ hour, scores }) => [hour, scoreOf(scores, 'airTempC')?.bias ?? Number.NaN])
    expect(hours.find(([hour]) => hour === 12)?.[1]).toBeCloseTo(3, 9)
    expect(hours.find(([hour]) => hour === 13)?.[1]).toBeCloseTo(1, 9)
    expect(hours).toHaveLength(15)
  })
  test('counts hours and days in the zone asked for', () => {
    const at = (zone?: string) =>
      compared((r) => {
        r.zone = zone
        const airTempC = (r.measured.places[0].airTempC ?? []).map((value, i) => (value ?? 0) - (i === 7 ? 3 : 0))
        r.measured.places[0] = { ...r.measured.places[0], airTempC }
      })
    const warmest = ({ places }: SkyComparison) =>
      places[0].byHour.find(({ scores }) => (scoreOf(scores, 'airTempC')?.bias ?? 0) > 2)?.hour
    expect(warmest(at())).toBe(12)
    expect(at().zone).toBe('UTC+02:00')
    expect(warmest(at('Australia/Darwin'))).toBe(19)
  })
  test('is told apart by how long after the issue a row lies', () => {
    // Issued 18:00 the evening before: the stamp 05:00 lies 11 h after it, 06:00 to 17:00 12 to 23 h.
    const { places } = compared((r) => {
      const airTempC = (r.measured.places[0].airTempC ?? []).map((value, i) => (value ?? 0) - (i === 0 ? 4 : 1))
      r.measured.places[0] = { ...r.measured.places[0], airTempC }
    })
    const leads = places[0].byLead.map(({ fromH, toH, scores }) => [fromH, toH, scoreOf(scores, 'airTempC')?.rows])
    expect(leads).toEqual([
      [6, 12, 1],
      [12, 24, 12],
      [24, 48, 2],
    ])
    expect(scoreOf(places[0].byLead[0].scores, 'airTempC')?.bias).toBeCloseTo(4, 9)
    const typical = compared((r) => {
      r.forecast.source = 'typical'
    })
    expect(typical.places[0].byLead).toEqual([])
  })
  test('has the energy of the day over the measured', () => {
    // Cloud of half the sky lets 1 - 0.75·0.5^3.4 = 0.92896 through (Kasten & Czeplak 1980).
    const { places, notes } = compared((r) => {
      r.forecast = someSky(50)
    })
    const [one] = places[0].days
    expect(one).toMatchObject({ date: '2026-10-17', hours: 15 })
    expect(one.ratio).toBeCloseTo(0.92896, 4)
    expect(one.forecastWhm2 / one.measuredWhm2).toBeCloseTo(one.ratio ?? 0, 12)
    expect(scoreOf(places[0].scores, 'clearSkyIndex')?.bias).toBeLessThan(-0.06)
    expect(notes).toContain('The forecast brings cloud cover: irradiance is worked out from it.')
    expect(notes).toContain('No pressure in common, at least at one place.')
  })
})

describe('what a difference of two skies is worth', () => {
  test('is nothing where they are the same', () => {
    const { worth } = compared((r) => {
      r.day = day()
    })
    expect(worth?.closingWh).toBe(0)
    expect(worth?.lines.length).toBeGreaterThan(8)
    expect(worth?.lines.every(({ differenceWh }) => differenceWh === 0)).toBe(true)
  })
  test('is the difference of the ledgers, which close', () => {
    const { worth } = compared((r) => {
      r.measured = { ...someSky(70), source: 'measured' }
      r.day = day()
    })
    if (worth === null) throw new Error('no worth')
    const sum = (side: string) =>
      worth.lines.filter((line) => line.side === side).reduce((total, line) => total + line.differenceWh, 0)
    expect(worth).toMatchObject({ date: '2026-10-17', openingPct: 60, heldKmh: 60, car: 'Weaver 1' })
    expect(sum('income')).toBeGreaterThan(100)
    expect(worth.closingWh).toBeCloseTo(
      sum('income') - sum('spending') + worth.forecast.shortWh - worth.measured.shortWh,
      6,
    )
    expect(worth.forecast.cameInWh - worth.measured.cameInWh).toBeCloseTo(sum('income'), 6)
  })
  test('holds the speed that the forecast gave', () => {
    const { worth } = compared((r) => {
      r.measured = { ...someSky(70), source: 'measured' }
      r.day = day({ kind: 'meet-target' })
    })
    expect(worth?.heldKmh).toBeGreaterThan(30)
    expect(worth?.measured.drivenKm).toBeCloseTo(worth?.forecast.drivenKm ?? 0, 6)
    // At one speed in the same air, drag and rolling cost the same.
    const road = worth?.lines.filter(({ id }) => id === 'drag' || id === 'rolling') ?? []
    expect(road).toHaveLength(2)
    for (const { differenceWh } of road) expect(differenceWh).toBeCloseTo(0, 6)
  })
  test('of a later day is not that of the days before it', () => {
    const scene = { car: someCar(), race: someRace(), routes: { road: someRoute(300) }, sky: someSky(), speeds: {} }
    twoDays(scene)
    const cloudy = structuredClone(scene.sky)
    cloudy.places[0].cloudPct = cloudy.places[0].cloudPct?.map((value, i) => (i < 15 ? 90 : value))
    const { worth } = compared((r) => {
      r.forecast = scene.sky
      r.measured = { ...cloudy, source: 'measured' }
      r.day = { ...day(), race: scene.race, routes: scene.routes, date: '2026-10-18' }
    })
    // Only Saturday was cloudy; the light of the night's edge bends Sunday's first minutes a little.
    expect(Math.abs(worth?.closingWh ?? Number.NaN)).toBeLessThan(1)
  })
  test('needs both skies to reach over the day, and says which does not', () => {
    const short = fault((r) => {
      const [place] = r.measured.places
      const cut = <T>(values: T[] | undefined) => values?.slice(0, 8)
      r.measured.places[0] = {
        ...place,
        at: place.at.slice(0, 8),
        cloudPct: cut(place.cloudPct),
        airTempC: cut(place.airTempC),
        windMps: cut(place.windMps),
        windFromDeg: cut(place.windFromDeg),
      }
      r.day = day()
    })
    expect(short).toMatchObject({ code: 'sky-too-short', field: 'measured.places' })
  })
})

describe('skies that cannot be compared', () => {
  const later = (r: Request) => {
    r.measured.places[0] = {
      ...r.measured.places[0],
      at: r.measured.places[0].at.map((at) => at.replace('2026-10-17', '2026-10-18')),
    }
  }
  test('have no time in common, and both times are said', () => {
    const { code, field, detail } = fault((r) => {
      r.zone = 'Africa/Windhoek'
      later(r)
    })
    expect([code, field]).toEqual(['no-overlap', 'measured.places'])
    expect(detail).toContain('forecast covers 2026-10-17T04:00:00+02:00 to 2026-10-17T19:00:00+02:00')
    expect(detail).toContain('measured 2026-10-18T04:00:00+02:00 to 2026-10-18T19:00:00+02:00')
  })
  test('may be so at one of several places', () => {
    const { places, notes } = compared((r) => {
      const [place] = r.measured.places
      const at = place.at.map((stamp) => stamp.replace('2026-10-17', '2026-10-18'))
      r.measured.places.push({ ...place, name: 'Late', at })
    })
    expect(places.map(({ name }) => name)).toEqual(['Saltpan'])
    expect(notes).toContain('Late: no row that the forecast reaches over; left out.')
  })
  test('are told by the name of the one at fault', () => {
    const damp = fault((r) => {
      const [place] = r.measured.places
      const hot = (values?: (number | null)[]) => values?.map(() => 55)
      r.measured.places[0] = {
        ...place,
        airTempC: hot(place.airTempC),
        humidityPct: hot(place.airTempC)?.map(() => 95),
      }
    })
    expect(damp.field).toBe('measured.places[0].humidityPct[0]')
  })
})
