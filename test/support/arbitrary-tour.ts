import * as fc from 'fast-check'
import type { CarInput } from '../../server/documents/car.ts'
import type { RaceInput } from '../../server/documents/race.ts'
import type { SkyInput } from '../../server/documents/sky.ts'
import type { SpeedsInput } from '../../server/documents/speeds.ts'
import { anyDepartures } from './arbitrary.ts'
import { someCar, someRoute } from './scenario.ts'

const number = (min: number, max: number) => fc.double({ min, max, noNaN: true })

const clock = (minutes: number): string =>
  `${String(Math.floor(minutes / 60)).padStart(2, '0')}:${String(minutes % 60).padStart(2, '0')}`

/** The usual car with any pack, drag and motor; its strings stay in their windows, so that many days are cheap. */
const anyTourCar: fc.Arbitrary<CarInput> = fc
  .record({
    dragAreaM2: number(0.05, 0.6),
    motorMaxNm: number(10, 120),
    parallelCells: fc.integer({ min: 2, max: 30 }),
    reservePct: number(0, 40),
    regenerationPct: number(0, 95),
    departures: anyDepartures,
  })
  .map(({ dragAreaM2, motorMaxNm, parallelCells, reservePct, regenerationPct, departures }) => {
    const car = someCar()
    return {
      ...car,
      body: { ...car.body, dragAreaM2 },
      drive: { ...car.drive, motorMaxNm, regenerationPct },
      pack: { ...car.pack, parallelCells, reservePct, ...departures },
    }
  })

/** A stop of any length that may open after the car comes, or close before. */
const anyStop = fc.record({
  minutes: number(0, 200),
  opensAt: fc.option(fc.integer({ min: 6 * 60, max: 18 * 60 }), { nil: undefined }),
  openMin: fc.integer({ min: 1, max: 300 }),
  clockStarts: fc.constantFrom('on-arrival' as const, 'at-opening' as const),
  lift: fc.boolean(),
})

const anyStage = fc.record({ km: number(0.01, 60), stop: fc.option(anyStop, { nil: undefined, freq: 5 }) })

const anyDay = fc.record({
  from: fc.integer({ min: 6 * 60, max: 11 * 60 }),
  minutes: fc.integer({ min: 1, max: 300 }),
  charges: fc.boolean(),
  openingPct: fc.option(number(0, 100), { nil: undefined }),
  stages: fc.array(anyStage, { maxLength: 3 }),
})

/** A valid race of one to three days: stages of any length, none on some days, stops with hours of their own. */
const anyTour: fc.Arbitrary<RaceInput> = fc
  .record({ openingPct: number(0, 100), days: fc.array(anyDay, { minLength: 1, maxLength: 3, size: 'max' }) })
  .filter((race) => race.days.some((day) => day.stages.length > 0))
  .map((race) => ({
    name: 'Some tour',
    zone: 'UTC',
    openingPct: race.openingPct,
    penalties: { lateMinPerMin: 1, unfinishedMinPerKm: 2 },
    days: race.days.map((day, d) => ({
      date: `2026-10-${17 + d}`,
      driving: { from: clock(day.from), to: clock(day.from + day.minutes) },
      // Windows that overlap the driving hours are valid: the array then charges where the car stands.
      charging: day.charges
        ? [
            { from: clock(day.from - 40), to: clock(day.from + 5) },
            { from: clock(day.from + Math.floor(day.minutes / 2) + 6), to: clock(day.from + day.minutes + 60) },
          ]
        : [],
      ...(day.openingPct === undefined ? {} : { openingPct: day.openingPct }),
      targetPct: 30,
      stages: day.stages.map(({ km, stop }, s) => ({
        id: `day-${d}-stage-${s}`,
        name: `Stage ${s}`,
        route: 'road',
        fromKm: s,
        toKm: s + km,
        start: `start ${s}`,
        finish: `finish ${s}`,
        ...(stop === undefined ? {} : { stop: stopOf(stop) }),
      })),
    })),
  }))

function stopOf({ opensAt, openMin, ...stop }: { minutes: number; opensAt?: number; openMin: number }) {
  if (opensAt === undefined) return stop
  return { ...stop, opensAt: clock(opensAt), closesAt: clock(opensAt + openMin) }
}

const HOURS = Array.from({ length: 73 }, (_, i) => i)

/** Three days of one cloud, hourly. */
const sky = (cloudPct: number): SkyInput => ({
  name: 'Three days',
  source: 'forecast',
  issuedAt: '2026-10-16T18:00:00Z',
  places: [
    {
      name: 'Saltpan',
      latDeg: -23.5,
      lonDeg: 17,
      elevationM: 1200,
      at: HOURS.map((h) => new Date(Date.UTC(2026, 9, 17, h)).toISOString()),
      cloudPct: HOURS.map(() => cloudPct),
      airTempC: HOURS.map(() => 20),
    },
  ],
})

const anySpeeds: fc.Arbitrary<SpeedsInput> = fc.oneof(
  number(10, 130).map((speedKmh) => ({ kind: 'constant' as const, speedKmh })),
  fc.constant({ kind: 'meet-target' as const, lowestKmh: 50, highestKmh: 54 }),
)

/** A forecast request for a race of several days over a hill. */
export const anyTourRequest: fc.Arbitrary<unknown> = fc
  .record({ car: anyTourCar, race: anyTour, hillM: number(0, 4000), cloudPct: number(0, 100), speeds: anySpeeds })
  .map(({ hillM, cloudPct, ...rest }) => ({ ...rest, routes: { road: someRoute(95, hillM) }, sky: sky(cloudPct) }))
