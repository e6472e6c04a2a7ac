import { sent } from './attempt.ts'
import { wrongComparison, wrongNewForecast, wrongRacePlan, wrongRequest, wrongVariants, wrongWhatIf } from './bodies.ts'
import type { Door } from './document-doors.ts'

/** Attempts that run at once; each has a race of its own, so that its forecasts can be watched. */
export const LANES = 4
export const laneRace = (i: number): string => `fuzz-race-${i % LANES}`

/** Every address that computes. */
export const FORECAST_DOORS: Door[] = [
  {
    name: 'POST forecast',
    count: 360,
    takesDocuments: true,
    attempt: (by) =>
      sent('POST', '/api/v1/forecast', 'application/json', wrongRequest(by), { touches: null, yields: 'budget' }),
  },
  {
    name: 'POST tracker-report',
    count: 120,
    takesDocuments: true,
    attempt: (by) =>
      sent('POST', '/api/v1/tracker-report', 'application/json', wrongRequest(by), {
        touches: null,
        yields: 'tracker-days',
      }),
  },
  {
    name: 'POST pointing',
    count: 120,
    takesDocuments: true,
    attempt: (by) =>
      sent('POST', '/api/v1/pointing', 'application/json', wrongRequest(by), { touches: null, yields: 'pointing' }),
  },
  {
    name: 'POST races/:id/forecasts',
    count: 200,
    takesDocuments: true,
    attempt(by, i) {
      const id = laneRace(i)
      const rest = { touches: { kind: 'forecast', id }, yields: 'budget' } as const
      return sent('POST', `/api/v1/races/${id}/forecasts`, 'application/json', wrongNewForecast(by), rest)
    },
  },
  {
    name: 'POST what-if',
    count: 80,
    takesDocuments: true,
    attempt: (by) =>
      sent('POST', '/api/v1/what-if', 'application/json', wrongWhatIf(by), { touches: null, yields: null }),
  },
  {
    name: 'POST variants',
    count: 60,
    takesDocuments: true,
    attempt: (by) =>
      sent('POST', '/api/v1/variants', 'application/json', wrongVariants(by), { touches: null, yields: null }),
  },
  {
    name: 'POST race-plan',
    count: 60,
    takesDocuments: true,
    attempt: (by) =>
      sent('POST', '/api/v1/race-plan', 'application/json', wrongRacePlan(by), { touches: null, yields: null }),
  },
  {
    name: 'POST sky-comparison',
    count: 160,
    takesDocuments: true,
    attempt: (by) =>
      sent('POST', '/api/v1/sky-comparison', 'application/json', wrongComparison(by), { touches: null, yields: null }),
  },
]
