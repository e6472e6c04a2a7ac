import type { Kind } from '../compute/documents.ts'
import type { Problem } from '../documents/problem.ts'
import type { RaceDocument } from '../documents/race.ts'
import { counted, Fault } from '../errors.ts'
import type { StoredDocument } from '../store/document-store.ts'
import type { Store } from '../store/store.ts'

/**
 * A stored document that a request names in one of its fields.
 *
 * @throws Fault 'missing-document', naming the field
 */
export async function named(store: Store, kind: Kind, id: string, field: string): Promise<StoredDocument> {
  const stored = await store.documents.get(kind, id)
  if (stored !== null) return stored
  throw new Fault('missing-document', `There is no ${kind} "${id}".`, {
    errors: [{ field, value: JSON.stringify(id), detail: `expected the id of a stored ${kind}` }],
  })
}

/** Routes that a race runs on, from the store except those given. */
export async function routesOf(
  store: Store,
  race: RaceDocument,
  given: Record<string, unknown>,
): Promise<Map<string, StoredDocument>> {
  const ids = new Set(race.days.flatMap((day) => day.stages.map((stage) => stage.route)))
  const wanted = [...ids].filter((id) => !Object.hasOwn(given, id))
  const found = await Promise.all(wanted.map((id) => store.documents.get('route', id)))
  const missing = wanted.filter((_, i) => found[i] === null)
  if (missing.length > 0) throw missingRoutes(race, new Set(missing))
  return new Map(found.flatMap((stored) => (stored === null ? [] : [[stored.id, stored]])))
}

function missingRoutes(race: RaceDocument, missing: Set<string>): Fault {
  const errors: Problem[] = race.days.flatMap((day, i) =>
    day.stages.flatMap((stage, j) => {
      if (!missing.has(stage.route)) return []
      const detail = `expected the id of a stored route for the stage "${stage.id}"`
      return [{ field: `days[${i}].stages[${j}].route`, value: JSON.stringify(stage.route), detail }]
    }),
  )
  const names = [...missing].map((id) => `"${id}"`).join(', ')
  return new Fault(
    'missing-route',
    `${counted(errors.length, 'stage')} of "${race.name}" run on routes that do not exist: ${names}.`,
    { errors },
  )
}
