import { raceDocument, type RaceDocument } from '../documents/race.ts'
import type { Kind } from '../compute/documents.ts'
import { Fault } from '../errors.ts'
import type { StoredDocument } from '../store/document-store.ts'
import type { Store } from '../store/store.ts'

/**
 * A stored document.
 *
 * @throws Fault 'no-such-document', or 'no-such-version' where a version was asked for
 */
export async function find(store: Store, kind: Kind, id: string, version?: number): Promise<StoredDocument> {
  const found = await store.documents.get(kind, id, version)
  if (found !== null) return found
  if (version === undefined) throw new Fault('no-such-document', `There is no ${kind} "${id}".`)
  throw new Fault('no-such-version', `There is no version ${version} of a ${kind} "${id}".`)
}

/** A stored race, with the version that it is. */
export async function findRace(store: Store, id: string): Promise<{ stored: StoredDocument; race: RaceDocument }> {
  const stored = await find(store, 'race', id)
  return { stored, race: raceDocument.parse(stored.body) }
}
