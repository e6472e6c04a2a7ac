import type { CarInput } from '../../server/documents/car.ts'
import type { RaceInput } from '../../server/documents/race.ts'
import type { RouteInput } from '../../server/documents/route.ts'
import type { SkyInput } from '../../server/documents/sky.ts'

/** An invented day of two stages over a plateau: documents for the client’s tests. */
const panel = (name: string, pitchDeg: number) => ({ name, pitchDeg, lifts: true })
const string = (name: string, inSeries: number) => ({
  name,
  tracker: name,
  cellType: 'wafer',
  cells: [{ panel: name, inSeries }],
})
const tracker = (name: string) => ({
  name,
  window: { inputMinV: 20, inputMaxV: 90, inputMaxA: 8, outputMaxV: 140, outputMinV: 80, maxW: 600 },
  losses: { standingW: 1.2, switchingPct: 0.8, conductionOhm: 0.12, rectifierV: 0.25 },
})

export const CAR: CarInput = {
  name: 'Test car',
  body: { massKg: 250, dragAreaM2: 0.11, rollingCoefficient: 0.0035 },
  drive: {
    efficiencyPct: 95,
    regenerationPct: 70,
    motorMaxW: 5000,
    motorMaxNm: 120,
    wheelRadiusM: 0.27,
    regenerationMaxW: 1500,
  },
  auxiliaries: { drivingW: 35, parkedW: 8 },
  panels: [panel('Nose', 6), panel('Middle', 0), panel('Tail', -6)],
  stand: { tiltMaxDeg: 75 },
  cellTypes: {
    wafer: {
      lightCurrentA: 6.2,
      saturationCurrentA: 1e-9,
      seriesOhm: 0.004,
      shuntOhm: 12,
      idealityFactor: 1.15,
      lightCurrentAPerC: 0.003,
    },
  },
  strings: [string('Nose', 84), string('Middle', 84), string('Tail', 84)],
  trackers: [tracker('Nose'), tracker('Middle'), tracker('Tail')],
  pack: {
    seriesCells: 30,
    parallelCells: 14,
    cellAh: 3.4,
    cellOcv: [
      { chargePct: 0, restingV: 3 },
      { chargePct: 10, restingV: 3.35 },
      { chargePct: 50, restingV: 3.65 },
      { chargePct: 100, restingV: 4.15 },
    ],
    cellOhm: 0.04,
    cellMaxV: 4.2,
    cellMinV: 2.6,
    cellChargeMaxA: 1.7,
    cellDischargeMaxA: 7,
    reservePct: 10,
  },
}

/** About 290 km of invented road east of a made-up plain, with hills of 60 m. */
export function routeOf(points: number): RouteInput {
  const along = Array.from({ length: points }, (_, i) => i / (points - 1))
  return {
    name: 'Test road',
    points: {
      latDeg: along.map((t) => -23 + 0.15 * Math.sin(t * 9)),
      lonDeg: along.map((t) => 16 + 2.75 * t),
      elevationM: along.map((t) => 1100 + 380 * t + 60 * Math.sin(t * 40)),
    },
    limitKmh: 100,
  }
}

export const RACE: RaceInput = {
  name: 'Test race',
  zone: 'Africa/Windhoek',
  openingPct: 56,
  days: [
    {
      date: '2026-10-17',
      driving: { from: '08:30', to: '17:00' },
      charging: [
        { from: '06:30', to: '08:30' },
        { from: '13:00', to: '18:30' },
      ],
      targetPct: 40,
      stages: [
        {
          id: 'out',
          name: 'Stage 1',
          route: 'test-road',
          toKm: 160,
          start: 'Saltpan',
          finish: 'Twin Wells',
          stop: { minutes: 30 },
        },
        { id: 'on', name: 'Stage 2', route: 'test-road', fromKm: 160, start: 'Twin Wells', finish: 'Blue Gate' },
      ],
    },
  ],
}

/** Hourly cloud and air of that day and the one after, with an afternoon of cloud. */
export function skyOf(): SkyInput {
  const hours = Array.from({ length: 48 }, (_, i) => i)
  const startMs = Date.parse('2026-10-16T22:00:00Z')
  return {
    name: 'Test sky',
    source: 'forecast',
    issuedAt: '2026-10-16T18:00:00+02:00',
    places: [
      {
        name: 'Plain',
        latDeg: -23,
        lonDeg: 17.4,
        elevationM: 1200,
        at: hours.map((h) => new Date(startMs + h * 3_600_000).toISOString()),
        cloudPct: hours.map((h) => (h % 24 > 13 ? 45 : 10)),
        airTempC: hours.map((h) => 22 + 8 * Math.sin(((h - 9) / 12) * Math.PI)),
        humidityPct: hours.map(() => 25),
        windMps: hours.map(() => 3),
        windFromDeg: hours.map(() => 110),
        pressureHpa: hours.map(() => 885),
      },
    ],
  }
}
