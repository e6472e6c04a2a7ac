import type { Kept } from './questions.ts'

const NAME = 'stagewatt'
const TABLE = 'race-documents'
/** Races, cars and skies that are kept; those not used for longest go. */
const MOST_KEPT = 6

interface Row extends Kept {
  key: string
}

const done = <T>(request: IDBRequest<T>): Promise<T> =>
  new Promise((resolve, reject) => {
    request.addEventListener('success', () => resolve(request.result))
    request.addEventListener('error', () => reject(request.error ?? new Error('This browser keeps nothing.')))
  })

let opened: Promise<IDBDatabase> | null = null

function table(mode: IDBTransactionMode): Promise<IDBObjectStore> {
  opened ??= (() => {
    const request = indexedDB.open(NAME, 1)
    request.addEventListener('upgradeneeded', () => request.result.createObjectStore(TABLE, { keyPath: 'key' }))
    return done(request)
  })()
  return opened.then((database) => database.transaction(TABLE, mode).objectStore(TABLE))
}

/** The documents kept under a key; null where there are none, or where this browser keeps nothing. */
export async function keptUnder(key: string): Promise<Kept | null> {
  try {
    const row: Row | undefined = await done<Row | undefined>((await table('readonly')).get(key))
    return row ?? null
  } catch {
    return null
  }
}

/** Keeps documents through a reload; a browser that keeps nothing goes on without. */
export async function keep(key: string, kept: Kept): Promise<void> {
  try {
    const rows = await table('readwrite')
    await done(rows.put({ key, ...kept } satisfies Row))
    const all: Row[] = await done<Row[]>(rows.getAll())
    const old = all.sort((a, b) => b.keptAtMs - a.keptAtMs).slice(MOST_KEPT)
    await Promise.all(old.map((row) => done(rows.delete(row.key))))
  } catch {
    // Private windows may refuse; the page still has them until it is closed.
  }
}
