import { readingDocument } from '../../server/documents/reading.ts'
import { speedsDocument } from '../../server/documents/speeds.ts'
import { sent, type Attempt } from './attempt.ts'
import { SPEEDS } from './bases.ts'
import { publishedOnce, wrongJson } from './bodies.ts'
import type { Chance } from './chance.ts'
import type { JsonSchema } from './schema-limits.ts'

const RACE = '/api/v1/races/fuzz-race'
const DAY = `${RACE}/days/2026-10-17`

const idOf = (i: number): string => `00000000-0000-4000-9000-${String(i).padStart(12, '0')}`

/** A sound reading of the usual car. */
export const someReading = (i: number) => ({
  id: idOf(i),
  tracker: 'deck tracker',
  at: '2026-10-17T10:30:00+02:00',
  inputV: 66,
  inputA: 4,
  outputV: 112,
  outputA: 2.28,
})

const NO_SCHEMA: JsonSchema = {}
const CHOICE_SCHEMA: JsonSchema = { properties: { speeds: publishedOnce(speedsDocument) } }
const LIST_SCHEMA: JsonSchema = { properties: { readings: { items: publishedOnce(readingDocument) } } }

export interface CrewDoor {
  name: string
  count: number
  method: 'PUT' | 'POST'
  url: string
  body: (by: Chance, i: number) => object
  schema: JsonSchema
}

/** Every address at which a crew changes something that is no document. */
export const CREW_DOORS: CrewDoor[] = [
  {
    name: 'POST races/:id/readings, one',
    count: 80,
    method: 'POST',
    url: `${RACE}/readings?car=fuzz-car`,
    body: (_by, i) => someReading(i + 100),
    schema: publishedOnce(readingDocument),
  },
  {
    name: 'POST races/:id/readings, several',
    count: 50,
    method: 'POST',
    url: `${RACE}/readings?car=fuzz-car`,
    body: (_by, i) => ({ readings: [someReading(2 * i + 1000), { ...someReading(2 * i + 1001), note: 'again' }] }),
    schema: LIST_SCHEMA,
  },
  {
    name: 'PUT races/:id/days/:date/choice',
    count: 80,
    method: 'PUT',
    url: `${DAY}/choice`,
    body: (by) => ({ carId: 'fuzz-car', skyId: 'fuzz-sky', speeds: by.pick<object>(SPEEDS) }),
    schema: CHOICE_SCHEMA,
  },
  {
    name: 'POST races/:id/belief',
    count: 50,
    method: 'POST',
    url: `${RACE}/belief`,
    body: (by) => by.pick<object>([{ use: 'bench' }, { use: 'learned', widen: 2 }]),
    schema: NO_SCHEMA,
  },
  {
    name: 'POST races/:id/days/:date/shares',
    count: 50,
    method: 'POST',
    url: `${DAY}/shares`,
    body: () => ({ name: 'Escort' }),
    schema: NO_SCHEMA,
  },
  {
    name: 'POST sessions',
    count: 50,
    method: 'POST',
    url: '/api/v1/sessions',
    body: () => ({ token: 'A'.repeat(43) }),
    schema: NO_SCHEMA,
  },
]

export const crewAttempt = (door: CrewDoor, by: Chance, i: number, ifMatch?: string): Attempt =>
  sent(door.method, door.url, 'application/json', wrongJson(by, door.body(by, i), door.schema), {
    touches: null,
    yields: null,
    ...(ifMatch === undefined ? {} : { ifMatch }),
  })
