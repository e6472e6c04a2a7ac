import { describe, expect, test } from 'vitest'
import { carDocument } from '../../server/documents/car.ts'
import { checkDocument, MOST_PROBLEMS } from '../../server/documents/check.ts'
import type { Problem } from '../../server/documents/problem.ts'
import { raceDocument } from '../../server/documents/race.ts'
import { routeDocument } from '../../server/documents/route.ts'
import { someCar, someRace, someRoute } from '../support/scenario.ts'
import { WRONG_CARS } from './wrong-cars.ts'
import { WRONG_DOCUMENTS } from './wrong-documents.ts'

const CASES = [...WRONG_CARS, ...WRONG_DOCUMENTS]

type Change = (document: Record<string, never>) => void

/** The problems of a document after one change. */
function problemsOf(schema: Parameters<typeof checkDocument>[0], document: unknown, change: Change): Problem[] {
  const copy = structuredClone(document) as Record<string, never>
  change(copy)
  return checkDocument(schema, copy).problems ?? []
}

/** Sets a value at a path, making no new steps on the way. */
const set =
  (path: (string | number)[], value: unknown): Change =>
  (document) => {
    let at = document as Record<string | number, never>
    for (const step of path.slice(0, -1)) at = at[step]
    ;(at as Record<string | number, unknown>)[path[path.length - 1]] = value
  }

describe('a wrong document is refused with field, value and expectation', () => {
  test.each(CASES)('%s', (_name, schema, document, path, value, expected) => {
    const problems = problemsOf(schema, document, set(path, value))
    expect(problems).toContainEqual(expect.objectContaining(expected))
    for (const problem of problems) expect(problem.detail).not.toMatch(/undefined|NaN|\[object/)
  })

  test('a month that no year has is told once', () => {
    const problems = problemsOf(raceDocument, someRace(), set(['days', 0, 'date'], '2026-13-40'))
    const told = problems.filter(({ field }) => field === 'days[0].date')
    expect(told.map(({ detail }) => detail)).toEqual(['expected a date as YYYY-MM-DD'])
  })

  test('the same time written with and without seconds is the same time', () => {
    const race = someRace()
    race.days[0].release = '06:00:00'
    race.days[0].impound = '18:30:00'
    expect(checkDocument(raceDocument, race).problems).toBeUndefined()
  })

  test('every problem is told, not only the first', () => {
    const problems = problemsOf(carDocument, someCar(), (car) => {
      set(['body', 'massKg'], -1)(car)
      set(['drive', 'motorMaxW'], 'strong')(car)
      set(['hat'], 1)(car)
    })
    expect(problems.map((p) => p.field).sort()).toEqual(['body.massKg', 'drive.motorMaxW', 'hat'])
  })

  test('a table of wrong cells is told in at most a hundred lines', () => {
    const route = someRoute(200)
    route.points.latDeg.fill(999)
    expect(checkDocument(routeDocument, route).problems).toHaveLength(MOST_PROBLEMS)
  })

  test.each([[null], [[]], ['car'], [7], [{}]])('%j is no car, and the answer says so without a fault', (value) => {
    expect(checkDocument(carDocument, value).problems?.length).toBeGreaterThan(0)
  })

  test('names that live in every object are not taken for fields of the document', () => {
    const problems = problemsOf(carDocument, someCar(), set(['strings', 0, 'cellType'], 'constructor'))
    expect(problems[0]).toMatchObject({ field: 'strings[0].cellType', value: '"constructor"' })
  })
})
