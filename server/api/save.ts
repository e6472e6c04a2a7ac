import type { Kind } from '../compute/documents.ts'
import { Fault } from '../errors.ts'
import type { Conflict, DocumentStore, Saved } from '../store/document-store.ts'
import { etag, type Versions } from './preconditions.ts'

interface Condition {
  ifMatch: Versions
  ifNoneMatch: Versions
}

interface ToSave {
  kind: Kind
  id: string
  name: string
  document: object
}

/**
 * Saves a document: creates it when no version was named, else replaces the version that was.
 *
 * @throws Fault 'precondition-required' or 'version-changed', naming the version that holds now
 */
export async function save(
  documents: DocumentStore,
  { kind, id, name, document }: ToSave,
  condition: Condition,
): Promise<Saved & { isNew: boolean }> {
  const { ifMatch, ifNoneMatch } = condition
  const isNew = ifMatch === null
  const outcome = isNew
    ? await documents.create(kind, id, name, document)
    : await oneOf(ifMatch, (version) => documents.replace(kind, id, version, name, document))
  if (outcome === 'missing') throw missing('version-changed', kind, id)
  if (!('conflict' in outcome)) return { ...outcome, isNew }
  throw isNew && ifNoneMatch === null ? required(kind, id, outcome) : changed(kind, id, outcome)
}

/**
 * Takes a document away if the version named still holds.
 *
 * @throws Fault 'no-such-document', 'precondition-required' or 'version-changed'
 */
export async function remove(documents: DocumentStore, kind: Kind, id: string, ifMatch: Versions): Promise<void> {
  // No version is 0: the store answers with the one that holds now.
  const outcome = await oneOf(ifMatch ?? [0], (version) => documents.remove(kind, id, version))
  if (outcome === 'removed') return
  if (outcome === 'missing') throw missing('no-such-document', kind, id)
  throw ifMatch === null ? required(kind, id, outcome) : changed(kind, id, outcome)
}

const TRIES = 5

/** What came of the first of the named versions that holds; '*' names whichever does. */
async function oneOf<T>(
  named: number[] | '*',
  attempt: (version: number) => Promise<T | Conflict>,
): Promise<T | Conflict> {
  let outcome = await attempt(named === '*' ? 0 : (named[0] ?? 0))
  for (let tries = 0; tries < TRIES && isConflict(outcome); tries++) {
    if (named !== '*' && !named.includes(outcome.conflict)) return outcome
    outcome = await attempt(outcome.conflict)
  }
  return outcome
}

const isConflict = (outcome: unknown): outcome is Conflict =>
  typeof outcome === 'object' && outcome !== null && 'conflict' in outcome

const missing = (code: 'version-changed' | 'no-such-document', kind: Kind, id: string): Fault =>
  new Fault(code, `There is no ${kind} "${id}" now.`)

const required = (kind: Kind, id: string, { conflict }: Conflict): Fault =>
  new Fault(
    'precondition-required',
    `The ${kind} "${id}" exists in version ${conflict}; send If-Match: ${etag(conflict)} to change that version.`,
    {
      errors: [{ field: 'If-Match', detail: `expected ${etag(conflict)}, the version that holds now` }],
      headers: { etag: etag(conflict) },
    },
  )

const changed = (kind: Kind, id: string, { conflict }: Conflict): Fault =>
  new Fault(
    'version-changed',
    `The ${kind} "${id}" is in version ${conflict} now; read it again, then repeat the change.`,
    {
      errors: [{ field: 'If-Match', detail: `expected ${etag(conflict)}, the version that holds now` }],
      headers: { etag: etag(conflict) },
    },
  )
