import * as fc from 'fast-check'
import { afterAll, describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import type { SpeedsInput } from '../../server/documents/speeds.ts'
import type { RacePlanDay, RacePlanDocument } from '../../server/documents/race-plan.ts'
import { racePlanDocuments } from '../../server/documents/race-plan-model.ts'
import { type RacePlanRequest, racePlanRequest } from '../../server/documents/race-plan-request.ts'
import { anyTourRequest } from '../support/arbitrary-tour.ts'

const RUNS = 120
/** What a day may differ by from its forecast: its battery counted again from the whole speeds of all days before. [Wh] */
const OFF_WH = 1
/** What whole speeds may lack where the best ones just keep all. [Wh] */
const LACK_WH = 5
const seen = new Map<string, number>()

/** Any race, its last day's close as it is, those before free or fixed. */
const anyRequest = fc
  .record({
    tour: anyTourRequest,
    fixedPct: fc.array(fc.option(fc.integer({ min: 10, max: 90 })), { minLength: 3, maxLength: 3 }),
  })
  .map(({ tour, fixedPct }) => {
    const { speeds: _speeds, ...documents } = tour as { speeds: unknown; race: { days: { date: string }[] } }
    const nights = documents.race.days.slice(0, -1).map(({ date }, d) => {
      const chargePct = fixedPct[d]
      return chargePct === null ? { date, kind: 'free' } : { date, kind: 'fixed', chargePct }
    })
    return { ...documents, nights, members: 50 }
  })

function racePlan(input: object): { request: RacePlanRequest; plan: RacePlanDocument } {
  const { document, problems } = checkDocument(racePlanRequest, input)
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return { request: document, plan: racePlanDocuments(document) }
}

/** Speeds of the days driven so far, outside them an ordinary one. */
function speedsOf(days: RacePlanDay[]): SpeedsInput {
  const sections = days.flatMap(({ road }) => (road?.speeds.kind === 'sections' ? road.speeds.sections : []))
  return { kind: 'sections', speedKmh: 70, sections }
}

/** What a forecast of the race up to the last of some days says of it, at the speeds that they are planned with. */
function forecastOf(request: RacePlanRequest, days: RacePlanDay[]) {
  const { camp } = days[days.length - 1]
  const { car, routes, sky, race } = request
  const first = { ...race, days: race.days.slice(0, days.length).map(planned) }
  const until = camp === null ? {} : { until: camp.until }
  const body = { car, routes, sky, race: first, speeds: speedsOf(days), ...until }
  const { document, problems } = checkDocument(forecastRequest, body)
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return forecastDocuments(document).days[days.length - 1]

  /** A plan opens its days as those before close. */
  function planned({ openingPct, ...day }: (typeof race.days)[number], d: number): typeof day {
    return d === 0 ? { ...day, ...(openingPct === undefined ? {} : { openingPct }) } : day
  }
}

/** Whether the days before end where their stages do, with all that is wanted. */
const isWholeSoFar = (days: RacePlanDay[]): boolean =>
  days.slice(0, -1).every(({ state, road }) => state === 'parked' || (state === 'driven' && road?.keepsAll === true))

function expectSound(request: RacePlanRequest, days: RacePlanDay[]): void {
  const day = days[days.length - 1]
  expect(JSON.stringify(day)).not.toMatch(/NaN|undefined|Infinity|Invalid/)
  expect(day.text.length).toBeGreaterThan(5)
  expect(day.road === null).toBe(day.state !== 'driven' && day.state !== 'camp')
  expect(day.camp === null).toBe(day.state !== 'camp')
  const { road, close } = day
  if (road === null) return
  expect(road.withinMin ?? 0).toBeGreaterThanOrEqual(0)
  expect(road.withinMin ?? 0).toBeLessThanOrEqual(road.bestMin)
  if (!isWholeSoFar(days)) return
  const again = forecastOf(request, days)
  const arrivedMs = Date.parse(again.spans.findLast(({ kind }) => kind === 'drive')?.to ?? '')
  expect(Math.abs(arrivedMs - Date.parse(road.arriveAt))).toBeLessThanOrEqual(1000)
  expect(Math.abs(again.closing.wh - (close.closing?.wh ?? Number.NaN))).toBeLessThan(OFF_WH * days.length)
  seen.set('compared', (seen.get('compared') ?? 0) + 1)
  if (!road.keepsAll) return
  if (again.ledger.shortWh === 0) expect(road.drivingMin).toBeGreaterThanOrEqual(road.bestMin - 0.02)
  const reserveWh = again.reserve.wh
  expect(road.leastSpareWh).toBeGreaterThan(Math.min(again.opening.wh - reserveWh, 0) - LACK_WH)
  expect(close.closing?.wh).toBeGreaterThan(close.wanted.wh - LACK_WH)
}

describe('for any race of several days', { timeout: 120_000 }, () => {
  test('every day of its plan is what a forecast of the race says, and keeps what it says', () => {
    fc.assert(
      fc.property(anyRequest, (input) => {
        const { request, plan } = racePlan(input)
        plan.days.forEach((day, d) => {
          seen.set(day.state, (seen.get(day.state) ?? 0) + 1)
          expectSound(request, plan.days.slice(0, d + 1))
        })
        seen.set(plan.outcome.kind, (seen.get(plan.outcome.kind) ?? 0) + 1)
      }),
      { numRuns: RUNS, seed: 3, endOnFailure: true },
    )
  })

  afterAll(() => {
    for (const what of ['driven', 'camp', 'impossible', 'parked', 'planned', 'unfinished'])
      expect(seen.get(what), what).toBeGreaterThan(2)
    expect(seen.get('compared')).toBeGreaterThan(20)
  })
})
