import type { SpeedsInput } from '../../documents/speeds.ts'
import { carExample } from './car.ts'
import { coastExample } from './coast-down.ts'
import { raceExample } from './race.ts'
import { routeExample } from './route.ts'
import { measuredExample, skyExample } from './sky.ts'
import { twoDayRace, twoDaySky } from './two-days.ts'

export interface Example {
  title: string
  document: object
}

const speedsExample: SpeedsInput = { kind: 'constant', speedKmh: 62 }

/** Worked examples of everything that people write, invented; together they give a forecast. */
export const EXAMPLES: Record<string, Example> = {
  car: { title: 'A car with four panels', document: carExample },
  route: { title: 'A short road', document: routeExample },
  race: { title: 'One day with two stages and a stop', document: raceExample },
  sky: { title: 'An hourly forecast for one place', document: skyExample },
  speeds: { title: 'One held speed', document: speedsExample },
  'coast-down': { title: 'Four runs of a coast-down test', document: coastExample },
  'forecast-request': {
    title: 'A forecast of whole documents',
    document: {
      car: carExample,
      race: raceExample,
      routes: { 'saltpan-twin-wells': routeExample },
      sky: skyExample,
      speeds: speedsExample,
    },
  },
  'what-if-request': {
    title: 'Less sun, a headwind and a longer stop beside the day’s best plan',
    document: {
      car: carExample,
      race: raceExample,
      routes: { 'saltpan-twin-wells': routeExample },
      sky: skyExample,
      date: '2026-10-17',
      variants: [
        { name: 'A tenth less sun', change: { sunPct: 90 } },
        { name: 'Headwind of 2 m/s more', change: { headwindMps: 2 } },
        { name: 'A flat tyre', change: { stopMinutes: 8, rollingPct: 103 } },
      ],
    },
  },
  'race-plan-request': {
    title: 'Two days together: how much to carry over the night',
    document: {
      car: carExample,
      race: twoDayRace,
      routes: { 'saltpan-twin-wells': routeExample },
      sky: twoDaySky,
      members: 500,
    },
  },
  'variants-request': {
    title: 'A lighter car, a later start under less sun and one held speed beside the day’s best plan',
    document: {
      car: carExample,
      race: raceExample,
      routes: { 'saltpan-twin-wells': routeExample },
      sky: skyExample,
      date: '2026-10-17',
      variants: [
        { name: 'Lighter by 15 kg', car: { body: { massKg: carExample.body.massKg - 15 } } },
        { name: 'Less sun, flat tyre', change: { sunPct: 90, stopMinutes: 8 } },
        { name: 'Held at 62 km/h', speeds: speedsExample },
      ],
    },
  },
  'sky-comparison': {
    title: 'A forecast beside what was measured',
    document: { forecast: skyExample, measured: measuredExample },
  },
}
