import { raceDocument, type RaceDocument } from '../documents/race.ts'
import type { Kind } from '../compute/documents.ts'
import { Fault } from '../errors.ts'
import type { DocumentText, StoredDocument } from '../store/document-store.ts'
import type { Store } from '../store/store.ts'

/**
 * A stored document.
 *
 * @throws Fault 'no-such-document', or 'no-such-version' where a version was asked for
 */
export async function find(store: Store, kind: Kind, id: string, version?: number): Promise<StoredDocument> {
  return (await store.documents.get(kind, id, version)) ?? missing(kind, id, version)
}

/** The same for handing on, its body not read. */
export const findText = async (store: Store, kind: Kind, id: string, version?: number): Promise<DocumentText> =>
  (await store.documents.text(kind, id, version)) ?? missing(kind, id, version)

function missing(kind: Kind, id: string, version?: number): never {
  if (version === undefined) throw new Fault('no-such-document', `There is no ${kind} "${id}".`)
  throw new Fault('no-such-version', `There is no version ${version} of a ${kind} "${id}".`)
}

/** A stored race, with the version that it is. */
export async function findRace(store: Store, id: string): Promise<{ stored: StoredDocument; race: RaceDocument }> {
  const stored = await find(store, 'race', id)
  return { stored, race: raceDocument.parse(stored.body) }
}
