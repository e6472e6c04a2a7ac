import type { Kind } from '../compute/documents.ts'
import type { Problem } from '../documents/problem.ts'
import type { RaceDocument } from '../documents/race.ts'
import { counted, Fault } from '../errors.ts'
import type { DocumentText, StoredDocument } from '../store/document-store.ts'
import type { Store } from '../store/store.ts'

/**
 * A stored document that a request names in one of its fields.
 *
 * @throws Fault 'missing-document', naming the field
 */
export async function named(store: Store, kind: Kind, id: string, field: string): Promise<StoredDocument> {
  return (await store.documents.get(kind, id)) ?? missing(kind, id, field)
}

/** The same as text, for handing on. */
export const namedText = async (store: Store, kind: Kind, id: string, field: string): Promise<DocumentText> =>
  (await store.documents.text(kind, id)) ?? missing(kind, id, field)

function missing(kind: Kind, id: string, field: string): never {
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
  return found(race, given, (id) => store.documents.get('route', id))
}

/** The same as text, for handing on. */
export const routeTextsOf = (store: Store, race: RaceDocument): Promise<Map<string, DocumentText>> =>
  found(race, {}, (id) => store.documents.text('route', id))

async function found<D extends { id: string }>(
  race: RaceDocument,
  given: Record<string, unknown>,
  get: (id: string) => Promise<D | null>,
): Promise<Map<string, D>> {
  const ids = new Set(race.days.flatMap((day) => day.stages.map((stage) => stage.route)))
  const wanted = [...ids].filter((id) => !Object.hasOwn(given, id))
  const routes = await Promise.all(wanted.map(get))
  const unknown = wanted.filter((_, i) => routes[i] === null)
  if (unknown.length > 0) throw missingRoutes(race, new Set(unknown))
  return new Map(routes.flatMap((route) => (route === null ? [] : [[route.id, route]])))
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
