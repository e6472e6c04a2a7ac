import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { type Service, startService } from '../api/service.ts'
import { typed } from './attempt.ts'
import { WHOLE } from './bases.ts'
import { chance } from './chance.ts'
import { CREW_DOORS, crewAttempt, type CrewDoor } from './crew-doors.ts'
import { complaint } from './verdict.ts'

const SEED = process.env.FUZZ_SEED ?? '20261017'
const TABLES = ['readings', 'reading_marks', 'day_choices', 'belief_uses', 'access_links', 'sessions', 'forecasts']

let service: Service
beforeAll(async () => {
  service = await startService({ timeLimitMs: 25_000 })
  const { documents } = service.store
  await documents.create('car', 'fuzz-car', 'car', WHOLE.car)
  await documents.create('route', 'road', 'road', WHOLE.routes.road)
  await documents.create('race', 'fuzz-race', 'race', WHOLE.race)
  await documents.create('sky', 'fuzz-sky', 'sky', WHOLE.sky)
})
afterAll(() => service.close())

/** Rows of every table that a crew's doors write to. */
async function rowCounts(): Promise<string> {
  const { sql } = service.database
  const counts = await Promise.all(TABLES.map((table) => sql`select count(*)::text as n from ${sql(table)}`))
  return counts.map(([row], i) => `${TABLES[i]} ${String(row.n)}`).join(', ')
}

/** The version that the followed choice has now, for If-Match. */
async function choiceVersion({ method, url }: CrewDoor): Promise<string | undefined> {
  if (method !== 'PUT') return undefined
  const { version } = (await service.ask({ url })).json()
  return version === undefined ? undefined : `"${version}"`
}

test.each(CREW_DOORS.filter(({ url }) => !url.endsWith('/sessions')))('$name takes what is sound', async (door) => {
  const { method, url } = door
  const version = await choiceVersion(door)
  const headers = { 'content-type': 'application/json', ...(version === undefined ? {} : { 'if-match': version }) }
  const answer = await service.ask({ method, url, headers, payload: JSON.stringify(door.body(chance('sound'), 9000)) })
  expect([200, 201], answer.body).toContain(answer.statusCode)
})

describe('at the doors of a crew, what is wrong is refused by its field and changes nothing:', () => {
  test.each(CREW_DOORS)('$name, $count times', { timeout: 180_000 }, async (door) => {
    const sums = { oneOff: 0, refused: 0, accepted: 0 }
    for (let i = 0; i < door.count; i++) {
      const attempt = crewAttempt(door, chance(`${SEED} ${door.name} ${i}`), i, await choiceVersion(door))
      const before = await rowCounts()
      const answer = await service.ask(attempt.request)
      const told = `seed ${SEED}, ${door.name} ${i}: ${attempt.what}\n${typed(attempt.request)}\n${answer.body}`
      expect(complaint(attempt, answer), told).toBeNull()
      if (attempt.isOneOff) sums.oneOff++
      if (answer.statusCode < 400) sums.accepted++
      else {
        sums.refused++
        expect(await rowCounts(), told).toBe(before)
      }
    }
    expect(sums.refused + sums.accepted).toBe(door.count)
    expect(sums.oneOff).toBeGreaterThanOrEqual(door.count / 2)
    expect(sums.refused).toBeGreaterThan(door.count / 3)
  })
})
