import fc from 'fast-check'
import type { CarInput } from '../../server/documents/car.ts'
import type { RaceInput } from '../../server/documents/race.ts'
import type { RouteInput } from '../../server/documents/route.ts'
import type { SkyInput } from '../../server/documents/sky.ts'
import type { SpeedsInput } from '../../server/documents/speeds.ts'
import { anyAir, anyDriveMore } from './arbitrary-road.ts'
import { someCar, someRace } from './scenario.ts'

const number = (min: number, max: number) => fc.double({ min, max, noNaN: true })

/** One time in six. */
const seldom = <T>(of: fc.Arbitrary<T>): fc.Arbitrary<T | undefined> =>
  fc.oneof({ weight: 5, arbitrary: fc.constant(undefined) }, { weight: 1, arbitrary: of })

/** Up to six rows around a circle, none more often than not. */
const around = <T>(row: (atDeg: number) => fc.Arbitrary<T>): fc.Arbitrary<T[] | undefined> =>
  fc.option(
    fc
      .uniqueArray(fc.integer({ min: 0, max: 359 }), { minLength: 1, maxLength: 6 })
      .chain((at) => fc.tuple(...at.sort((a, b) => a - b).map(row))),
    { nil: undefined, freq: 1 },
  )

const shade = around((bearingDeg) =>
  fc.record({ bearingDeg: fc.constant(bearingDeg), heightDeg: number(0, 90), lostPct: number(0, 100) }),
)

const horizon = around((azimuthDeg) => fc.record({ azimuthDeg: fc.constant(azimuthDeg), heightDeg: number(0, 90) }))

/** Panels, strings and trackers of all sorts: steep, spanning, faulty, narrow windows, lossy, hot, shared, dead. */
const array = fc.record({
  pitches: fc.array(number(-30, 30), { minLength: 1, maxLength: 3 }),
  cells: fc.array(fc.integer({ min: 5, max: 200 }), { minLength: 1, maxLength: 3 }),
  spans: fc.boolean(),
  bypassDiodes: fc.integer({ min: 0, max: 5 }),
  fault: seldom(fc.constantFrom('weak', 'shorted', 'open')),
  lightPct: number(0, 100),
  lifts: fc.boolean(),
  shade,
  heatCapacityKjM2C: number(0, 20),
  laminarStart: fc.boolean(),
  soilingPct: number(0, 60),
  inputMinV: number(0, 60),
  inputMaxV: number(61, 300),
  inputMaxA: number(0.5, 12),
  maxW: number(20, 1000),
  standingW: number(0, 20),
  conductionOhm: number(0, 1),
  rectifierV: number(0, 2),
  leastRiseV: seldom(number(0, 20)),
  standbyW: number(0, 5),
  fullToC: seldom(number(0, 80)),
  leastPct: number(0, 100),
  channels: fc.integer({ min: 1, max: 3 }),
  dead: seldom(fc.integer({ min: 0, max: 2 })),
  glass: fc.constantFrom('martin-ruiz' as const, 'physical' as const, 'ashrae' as const, 'none' as const),
})

/** One cell under the first diode of a panel that is at fault, or none. */
const faultsOn = (
  panel: string,
  { fault, lightPct }: { fault?: 'weak' | 'shorted' | 'open'; lightPct: number },
): CarInput['strings'][number]['faults'] => {
  if (fault === undefined) return []
  return [fault === 'weak' ? { kind: fault, panel, lightPct } : { kind: fault, panel }]
}

/** Names of the channels beside the first on a string. */
const besides = (channels: number, i: number): string[] =>
  Array.from({ length: channels - 1 }, (_, c) => `tracker ${i + 1}.${c + 1}`)

/** How a pack may depart from cells that are alike, as warm as the air and of one resistance. */
export const anyDepartures: fc.Arbitrary<Partial<CarInput['pack']>> = fc
  .record({
    weakestCell: seldom(
      fc.record({
        capacityDeficitPct: number(0, 40),
        chargeOffsetPct: number(-20, 20),
        extraResistancePct: number(0, 300),
      }),
    ),
    heat: seldom(
      fc.record({ capacityKjPerC: number(1, 100), lossMovingWPerC: number(0, 50), lossParkedWPerC: number(0, 20) }),
    ),
    coldFactor: seldom(number(1, 4)),
    emptyFactor: number(1, 3),
  })
  .map(({ weakestCell, heat, coldFactor, emptyFactor }) => ({
    ...(weakestCell === undefined ? {} : { weakestCell }),
    // A pack that may warm up keeps working: else more sun may rightly bring less.
    ...(heat === undefined ? {} : { heat, chargeTemps: { maxC: 120 }, dischargeTemps: { maxC: 120 } }),
    ...(coldFactor === undefined
      ? {}
      : {
          ohmFactors: {
            tempsC: [-10, 25],
            rows: [
              { chargePct: 0, factors: [coldFactor * emptyFactor, emptyFactor] },
              { chargePct: 30, factors: [coldFactor, 1] },
            ],
          },
        }),
  }))

/** A valid car: light or heavy, slick or blunt, with a small or large pack. */
export const anyCar: fc.Arbitrary<CarInput> = fc
  .record({
    array,
    massKg: number(80, 1500),
    dragAreaM2: number(0.05, 1),
    rollingCoefficient: number(0.002, 0.02),
    efficiencyPct: number(50, 100),
    regenerationPct: number(0, 95),
    motorMaxW: number(500, 50_000),
    drivingW: number(0, 300),
    parallelCells: fc.integer({ min: 2, max: 60 }),
    cellOhm: number(0.001, 0.2),
    coulombicPct: number(90, 100),
    reservePct: number(0, 40),
    departures: anyDepartures,
    air: anyAir,
    driveMore: fc.option(anyDriveMore, { nil: {} }),
    chargingW: fc.option(number(0, 100), { nil: undefined }),
  })
  .map((a) => {
    const car = someCar()
    const { pitches, cells, spans } = a.array
    const names = cells.map((_, i) => `string ${i + 1}`)
    return {
      ...car,
      body: {
        ...car.body,
        massKg: a.massKg,
        dragAreaM2: a.dragAreaM2,
        rollingCoefficient: a.rollingCoefficient,
        ...a.air,
      },
      drive: {
        ...car.drive,
        efficiencyPct: a.efficiencyPct,
        regenerationPct: a.regenerationPct,
        motorMaxW: a.motorMaxW,
        ...a.driveMore,
      },
      auxiliaries: { drivingW: a.drivingW, parkedW: a.drivingW / 4, chargingW: a.chargingW },
      panels: pitches.map((pitchDeg, i) => ({
        name: `panel ${i + 1}`,
        pitchDeg,
        lifts: a.array.lifts,
        glass: a.array.glass,
        shade: i === 0 ? a.array.shade : undefined,
        cooling: {
          kind: 'car-body' as const,
          heatCapacityKjM2C: a.array.heatCapacityKjM2C,
          laminarStart: a.array.laminarStart,
        },
      })),
      strings: names.map((name, i) => ({
        name,
        tracker: `tracker ${i + 1}`,
        alsoTrackers: besides(a.array.channels, i),
        cellType: 'silicon',
        soilingPct: a.array.soilingPct,
        cells: (spans ? pitches.map((_, p) => p + 1) : [(i % pitches.length) + 1]).map((p) => ({
          panel: `panel ${p}`,
          inSeries: cells[i],
          bypassDiodes: a.array.bypassDiodes,
        })),
        faults: faultsOn(`panel ${spans ? 1 : (i % pitches.length) + 1}`, a.array),
      })),
      trackers: names
        .flatMap((_, i) => [`tracker ${i + 1}`, ...besides(a.array.channels, i)])
        .map((name, i) => ({
          name,
          isDead: i === a.array.dead,
          standbyW: a.array.standbyW,
          ...(a.array.fullToC === undefined
            ? {}
            : { derating: { fullToC: a.array.fullToC, leastFromC: a.array.fullToC + 20, leastPct: a.array.leastPct } }),
          window: {
            leastRiseV: a.array.leastRiseV ?? 0,
            inputMinV: a.array.inputMinV,
            inputMaxV: a.array.inputMaxV,
            inputMaxA: a.array.inputMaxA,
            outputMaxV: 130,
            maxW: a.array.maxW,
          },
          losses: {
            standingW: a.array.standingW,
            switchingPct: 0.5,
            conductionOhm: a.array.conductionOhm,
            rectifierV: a.array.rectifierV,
          },
        })),
      pack: {
        ...car.pack,
        parallelCells: a.parallelCells,
        cellOhm: a.cellOhm,
        coulombicPct: a.coulombicPct,
        reservePct: a.reservePct,
        ...a.departures,
      },
    }
  })

/** A valid road of 2 to 300 km anywhere between 60° south and 60° north. */
export const anyRoute: fc.Arbitrary<RouteInput> = fc
  .record({
    latDeg: number(-60, 60),
    lonDeg: number(-179, 179),
    turns: fc.array(number(-1.5, 1.5), { minLength: 4, maxLength: 60 }),
    climbs: number(0, 60),
    stepKm: number(0.2, 5),
    limitKmh: number(20, 130),
    surfaceFactor: number(0.8, 2),
    haltsPerKm: number(0, 1),
    groundAlbedo: number(0, 1),
    roadHeatC: number(0, 10),
  })
  .map((a) => {
    const latDeg = [a.latDeg]
    const lonDeg = [a.lonDeg]
    const elevationM = [500]
    let heading = 0
    a.turns.forEach((turn, i) => {
      heading += turn
      const step = a.stepKm / 111.2
      latDeg.push(latDeg[i] + step * Math.cos(heading))
      lonDeg.push(lonDeg[i] + (step * Math.sin(heading)) / Math.cos((latDeg[i] * Math.PI) / 180))
      elevationM.push(500 + a.climbs * Math.sin(i * 1.7 + turn))
    })
    return {
      name: 'Some road',
      points: { latDeg, lonDeg: lonDeg.map((lon) => Math.max(Math.min(lon, 180), -180)), elevationM },
      limitKmh: 110,
      groundAlbedo: a.groundAlbedo,
      roadHeatC: a.roadHeatC,
      stretches: [
        { fromKm: 0.1, toKm: 0.5, limitKmh: a.limitKmh, surfaceFactor: a.surfaceFactor, haltsPerKm: a.haltsPerKm },
      ],
    }
  })

const HOURS = Array.from({ length: 25 }, (_, i) => i)

/** A valid sky of one or two places, by cloud, by GHI or by all three irradiances. */
export const anySky: fc.Arbitrary<SkyInput> = fc
  .record({
    kind: fc.constantFrom('cloud', 'ghi', 'all'),
    share: fc.array(number(0, 1), { minLength: 25, maxLength: 25 }),
    airTempC: number(-20, 45),
    windMps: number(0, 25),
    windFromDeg: number(0, 360),
    elevationM: number(0, 2500),
    places: fc.integer({ min: 1, max: 2 }),
  })
  .map((a) => ({
    name: 'Some sky',
    source: 'forecast' as const,
    issuedAt: '2026-10-16T18:00:00+00:00',
    places: Array.from({ length: a.places }, (_, p) => ({
      name: `place ${p + 1}`,
      latDeg: p === 0 ? 10 : -20,
      lonDeg: p * 5,
      elevationM: a.elevationM,
      at: HOURS.map((h) => new Date(Date.UTC(2026, 9, 17, h)).toISOString().replace('.000Z', '+00:00')),
      airTempC: HOURS.map(() => a.airTempC),
      windMps: HOURS.map(() => a.windMps),
      windFromDeg: HOURS.map(() => a.windFromDeg),
      ...(a.kind === 'cloud' ? { cloudPct: a.share.map((s) => s * 100) } : { ghiWm2: a.share.map((s) => s * 1000) }),
      ...(a.kind === 'all' ? { dniWm2: a.share.map((s) => s * 900), dhiWm2: a.share.map((s) => s * 200) } : {}),
    })),
  }))

const time = (minutes: number): string =>
  `${String(Math.floor(minutes / 60)).padStart(2, '0')}:${String(minutes % 60).padStart(2, '0')}`

/** A valid day of one stage, with or without a stop, windows and a target. */
export const anyRace: fc.Arbitrary<RaceInput> = fc
  .record({
    openingPct: number(0, 100),
    from: fc.integer({ min: 5 * 60, max: 11 * 60 }),
    hours: fc.integer({ min: 1, max: 10 }),
    charges: fc.boolean(),
    stops: fc.boolean(),
    minutes: number(0, 90),
    stopHorizon: horizon,
    morningHorizon: horizon,
  })
  .map((a) => {
    const race = someRace()
    const [day] = race.days
    const to = a.from + a.hours * 60
    const { stop: _stop, ...stage } = (day.stages ?? [])[0]
    return {
      ...race,
      zone: 'UTC',
      openingPct: a.openingPct,
      days: [
        {
          date: day.date,
          driving: { from: time(a.from), to: time(to) },
          charging: a.charges
            ? [
                { from: '04:00', to: time(a.from - 15), horizon: a.morningHorizon },
                { from: time(to), to: '22:00' },
              ]
            : [],
          targetPct: 30,
          stages: [a.stops ? { ...stage, stop: { minutes: a.minutes, horizon: a.stopHorizon } } : stage],
        },
      ],
    }
  })

/** A whole forecast request in the documents' own words, valid but for what does not fit together. */
export const anyRequest = (
  speeds: fc.Arbitrary<SpeedsInput> = number(10, 130).map((speedKmh) => ({ kind: 'constant' as const, speedKmh })),
): fc.Arbitrary<unknown> =>
  fc
    .record({ car: anyCar, race: anyRace, road: anyRoute, sky: anySky, speeds })
    .map(({ road, ...rest }) => ({ ...rest, routes: { road } }))
