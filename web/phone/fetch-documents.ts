import { signal } from '@preact/signals'
import { BASE } from '../api.ts'
import { keep, keptUnder } from './kept-documents.ts'
import type { Kept } from './questions.ts'

/** Whose documents: ids of race, car and sky. */
export interface Whose {
  race: string
  car: string
  sky: string
}

const keyOf = ({ race, car, sky }: Whose): string => [race, car, sky].join(' ')

/** What this device has of the documents asked for last; null where it has none. */
export const onPhone = signal<{ key: string; kept: Kept | null }>({ key: '', kept: null })

/** The documents of a race as far as this device has them. */
export async function documentsOf(whose: Whose): Promise<Kept | null> {
  const key = keyOf(whose)
  if (onPhone.value.key !== key) {
    const kept = await keptUnder(key)
    if (onPhone.value.key !== key) onPhone.value = { key, kept }
  }
  return onPhone.value.key === key ? onPhone.value.kept : null
}

/** Fetches what has changed of a race's documents and keeps it; without contact what is kept stays. */
export async function fetchDocuments(whose: Whose): Promise<void> {
  const before = await documentsOf(whose)
  const { race, car, sky } = whose
  const answer = await fetch(`${BASE}/races/${race}/documents?${new URLSearchParams({ car, sky })}`, {
    cache: 'no-store',
    ...(before === null ? {} : { headers: { 'if-none-match': before.edition } }),
  }).catch(() => null)
  if (answer === null || (answer.status !== 304 && !answer.ok)) return
  const now = { keptAtMs: Date.now() }
  const kept =
    answer.status === 304 && before !== null
      ? { ...before, ...now }
      : { ...now, edition: answer.headers.get('etag') ?? '', documents: await answer.json().catch(() => null) }
  if (kept.documents === null) return
  const key = keyOf(whose)
  if (onPhone.value.key === key) onPhone.value = { key, kept }
  await keep(key, kept)
}
