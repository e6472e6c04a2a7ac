import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { DOCUMENTS as SCHEMAS } from '../../server/compute/documents.ts'
import { type Service, startService } from '../api/service.ts'
import { ADDRESS_DOORS } from './address-doors.ts'
import { assault, soundComplaint, type Tally } from './assault.ts'
import { COLLECTIONS, type Kind, sent } from './attempt.ts'
import {
  COAST_TABLES,
  COAST_TESTS,
  DOCUMENTS,
  GPX,
  RACE_PLANS,
  REQUESTS,
  ROUTE_TABLES,
  SKY_TABLES,
  SPEEDS,
  WHAT_IFS,
  WHOLE,
} from './bases.ts'
import { DOCUMENT_DOORS } from './document-doors.ts'
import { FORECAST_DOORS, LANES, laneRace } from './forecast-doors.ts'
import { isRelated } from './json-path.ts'
import { MENDED } from './mended.ts'
import { published } from './schema-limits.ts'
import { sweep } from './sweep.ts'

/** Another seed tries other wrong documents: FUZZ_SEED=7 npx vitest run test/fuzz */
const SEED = process.env.FUZZ_SEED ?? '20261017'

const DOORS = [...DOCUMENT_DOORS, ...FORECAST_DOORS, ...ADDRESS_DOORS]
const tallies: Tally[] = []

let service: Service
beforeAll(async () => {
  service = await startService({ timeLimitMs: 25_000 })
  const { documents } = service.store
  await documents.create('car', 'fuzz-car', 'car', WHOLE.car)
  await documents.create('route', 'road', 'road', WHOLE.routes.road)
  await documents.create('race', 'fuzz-race', 'race', WHOLE.race)
  await documents.create('sky', 'fuzz-sky', 'sky', WHOLE.sky)
  for (let i = 0; i < LANES; i++) await documents.create('race', laneRace(i), 'race', WHOLE.race)
})
afterAll(() => service.close())

const sound = { what: 'sound', isWrong: false, isOneOff: false, names: null }

describe('what is sound is accepted, so that one wrong field is what a refusal is for:', () => {
  const put = (kind: Kind, id: string, type: string, body: string, query = '') =>
    sent('PUT', `/api/v1/${COLLECTIONS[kind]}/${id}${query}`, type, { ...sound, body }, { touches: null, yields: null })

  test.each(['car', 'route', 'race', 'sky'] as const)('every %s', async (kind) => {
    for (const [i, document] of DOCUMENTS[kind].entries()) {
      const attempt = put(kind, `sound-${i}`, 'application/json', JSON.stringify(document))
      expect(await soundComplaint(service, attempt)).toBeNull()
    }
  })

  test('every file', async () => {
    expect(await soundComplaint(service, put('route', 'gpx', 'application/gpx+xml', GPX))).toBeNull()
    for (const [i, { text }] of ROUTE_TABLES.entries())
      expect(await soundComplaint(service, put('route', `table-${i}`, 'text/csv', text))).toBeNull()
    for (const [i, { text, query }] of SKY_TABLES.entries())
      expect(await soundComplaint(service, put('sky', `table-${i}`, 'text/csv', text, `?${query}`))).toBeNull()
  })

  test('every coast-down', async () => {
    const rest = { touches: null, yields: null }
    for (const test of COAST_TESTS) {
      const wrong = { ...sound, body: JSON.stringify(test) }
      expect(
        await soundComplaint(service, sent('POST', '/api/v1/coast-down', 'application/json', wrong, rest)),
      ).toBeNull()
    }
    for (const { text, query } of COAST_TABLES) {
      const attempt = sent('POST', `/api/v1/coast-down?${query}`, 'text/csv', { ...sound, body: text }, rest)
      expect(await soundComplaint(service, attempt)).toBeNull()
    }
  })

  test('every what-if', async () => {
    for (const request of WHAT_IFS) {
      const wrong = { ...sound, body: JSON.stringify(request) }
      const attempt = sent('POST', '/api/v1/what-if', 'application/json', wrong, { touches: null, yields: null })
      expect(await soundComplaint(service, attempt)).toBeNull()
    }
  })

  test('every race plan', { timeout: 60_000 }, async () => {
    for (const request of RACE_PLANS) {
      const wrong = { ...sound, body: JSON.stringify(request) }
      const attempt = sent('POST', '/api/v1/race-plan', 'application/json', wrong, { touches: null, yields: null })
      expect(await soundComplaint(service, attempt)).toBeNull()
    }
  })

  test('every forecast', async () => {
    for (const body of [
      ...REQUESTS.map((r) => JSON.stringify(r)),
      ...SPEEDS.map((s) => JSON.stringify({ ...WHOLE, speeds: s })),
    ]) {
      const rest = { touches: null, yields: 'budget' } as const
      const attempt = sent('POST', '/api/v1/forecast', 'application/json', { ...sound, body }, rest)
      expect(await soundComplaint(service, attempt)).toBeNull()
    }
  })
})

test.each(MENDED)('%s is refused in few words', async (_what, request, status, code, field) => {
  const answer = await service.ask(request)
  expect(answer.json()).toMatchObject({ status, code })
  expect(answer.json().errors.map((error: { field: string }) => error.field)).toContain(field)
  expect(answer.body.length).toBeLessThan(5000)
})

test.each([
  ['car', 150],
  ['route', 20],
  ['race', 30],
  ['sky', 40],
] as const)('no object of a %s takes a stray key, no number passes its limits', async (kind, least) => {
  const wrong = sweep(DOCUMENTS[kind][1], published(SCHEMAS[kind]))
  expect(wrong.length).toBeGreaterThan(least)
  const url = `/api/v1/${COLLECTIONS[kind]}/swept`
  const headers = { 'content-type': 'application/json' }
  for (const { field, document } of wrong) {
    const answer = await service.ask({ method: 'PUT', url, headers, payload: JSON.stringify(document) })
    expect(answer.statusCode, field).toBe(422)
    expect(
      answer.json().errors.some((error: { field: string }) => isRelated(error.field, field)),
      field,
    ).toBe(true)
  }
  expect((await service.ask({ url })).statusCode).toBe(404)
})

describe('what is wrong is refused by its field, and changes nothing:', () => {
  test.each(DOORS)('$name, $count times', { timeout: 180_000 }, async (door) => {
    const tally = await assault(service, door, SEED)
    tallies.push(tally)
    expect(tally.failures.join('\n'), 'failures').toBe('')
    expect(tally.attempts).toBe(door.count)
    expect(tally.oneOff).toBeGreaterThanOrEqual(door.count / 2)
    expect(tally.refused).toBeGreaterThan(door.count / 3)
  })

  test('every door was tried: 2,000 documents and files at least, half of them wrong in one place only', () => {
    const names = DOORS.filter((door) => door.takesDocuments).map((door) => door.name)
    const documents = tallies.filter(({ door }) => names.includes(door))
    const sum = (pick: (tally: Tally) => number) => documents.reduce((total, tally) => total + pick(tally), 0)
    expect(tallies).toHaveLength(DOORS.length)
    expect(sum((tally) => tally.attempts)).toBeGreaterThanOrEqual(2000)
    expect(sum((tally) => tally.oneOff)).toBeGreaterThanOrEqual(sum((tally) => tally.attempts) / 2)
    expect(sum((tally) => tally.forecasts)).toBeGreaterThan(100)
    if (process.env.FUZZ_COUNTS === '1')
      console.table(tallies.map(({ failures, ...counts }) => ({ ...counts, failed: failures.length })))
  })
})
