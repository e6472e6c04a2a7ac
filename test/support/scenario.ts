import type { CarInput } from '../../server/documents/car.ts'
import type { RaceInput } from '../../server/documents/race.ts'
import type { RouteInput } from '../../server/documents/route.ts'
import type { SkyInput } from '../../server/documents/sky.ts'

/** An invented car small enough to read: two panels, two strings, two trackers. */
export const someCar = (): CarInput => ({
  name: 'Weaver 1',
  body: { massKg: 250, dragAreaM2: 0.1, rollingCoefficient: 0.0035 },
  drive: {
    efficiencyPct: 96,
    regenerationPct: 60,
    regenerationMaxW: 2000,
    motorMaxW: 5000,
    motorMaxNm: 90,
    wheelRadiusM: 0.28,
  },
  auxiliaries: { drivingW: 30, parkedW: 6 },
  panels: [
    { name: 'deck', lifts: true },
    { name: 'nose', pitchDeg: 8, lifts: true },
  ],
  stand: { tiltMaxDeg: 75 },
  cellTypes: {
    silicon: {
      lightCurrentA: 6.25,
      saturationCurrentA: 9e-12,
      seriesOhm: 0.0043,
      shuntOhm: 8.2,
      idealityFactor: 1.04,
      lightCurrentAPerC: 0.0026,
    },
  },
  strings: [
    { name: 'deck string', tracker: 'deck tracker', cellType: 'silicon', cells: [{ panel: 'deck', inSeries: 120 }] },
    { name: 'nose string', tracker: 'nose tracker', cellType: 'silicon', cells: [{ panel: 'nose', inSeries: 100 }] },
  ],
  trackers: ['deck tracker', 'nose tracker'].map((name) => ({
    name,
    window: { inputMinV: 30, inputMaxV: 100, inputMaxA: 8, outputMaxV: 130, maxW: 600 },
    losses: { standingW: 1, switchingPct: 0.5, conductionOhm: 0.08, rectifierV: 0.4 },
  })),
  pack: {
    seriesCells: 30,
    parallelCells: 14,
    cellAh: 3.35,
    cellOcv: [2.8, 3.28, 3.54, 3.66, 3.86, 4.07, 4.19].map((restingV, i) => ({
      chargePct: [0, 10, 30, 50, 70, 90, 100][i],
      restingV,
    })),
    cellOhm: 0.045,
    leadsOhm: 0.02,
    cellMaxV: 4.2,
    cellMinV: 2.6,
    cellChargeMaxA: 1.6,
    cellDischargeMaxA: 6,
    reservePct: 10,
  },
})

/** A road due north of about `km` kilometres, points every 500 m, with one hill in its middle. */
export function someRoute(km = 100, hillM = 0): RouteInput {
  const count = Math.round(km * 2) + 1
  const degreesPerKm = 1 / 110.75
  const share = (i: number) => i / (count - 1)
  return {
    name: 'Road to Twin Wells',
    points: {
      latDeg: Array.from({ length: count }, (_, i) => -23.5 + (i * degreesPerKm) / 2),
      lonDeg: Array.from({ length: count }, () => 17),
      elevationM: Array.from({ length: count }, (_, i) => 1200 + hillM * Math.sin(Math.PI * share(i)) ** 2),
    },
  }
}

/** One day of one stage on `someRoute`, Saturday 17 October 2026. */
export const someRace = (): RaceInput => ({
  name: 'Plateau Run',
  zone: 'Africa/Windhoek',
  openingPct: 60,
  days: [
    {
      date: '2026-10-17',
      release: '06:00',
      driving: { from: '08:00', to: '17:00' },
      charging: [
        { from: '06:00', to: '08:00' },
        { from: '15:00', to: '18:30' },
      ],
      impound: '19:00',
      targetPct: 40,
      stages: [
        {
          id: 'first',
          name: 'Saltpan to Twin Wells',
          route: 'road',
          start: 'Saltpan',
          finish: 'Twin Wells',
          stop: { minutes: 30 },
        },
      ],
    },
  ],
})

const HOURS = Array.from({ length: 15 }, (_, i) => i + 5)

/** A cloudless windless day over `someRoute`, hourly from 05:00 to 19:00. */
export const someSky = (cloudPct = 0): SkyInput => ({
  name: 'Clear Saturday',
  source: 'forecast',
  issuedAt: '2026-10-16T18:00:00+02:00',
  places: [
    {
      name: 'Saltpan',
      latDeg: -23.5,
      lonDeg: 17,
      elevationM: 1200,
      at: HOURS.map((h) => `2026-10-17T${String(h).padStart(2, '0')}:00:00+02:00`),
      cloudPct: HOURS.map(() => cloudPct),
      airTempC: HOURS.map((h) => 24 - 8 * Math.cos(((h - 3) * Math.PI) / 12)),
      windMps: HOURS.map(() => 0),
      windFromDeg: HOURS.map(() => 0),
    },
  ],
})
