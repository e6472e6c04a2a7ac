import { signal } from '@preact/signals'
import { BASE, json, tell } from './api.ts'
import { ownerToken, type Standing, standingAfter } from './links.ts'

export const standing = signal<Standing>(null)

/** Exchanges the link in the address for a cookie, then takes it out of the address and the history. */
export async function signIn(): Promise<void> {
  const token = ownerToken(location.hash)
  if (token === null) return
  const answer = await tell(`${BASE}/sessions`, { method: 'POST', ...json({ token }) })
  standing.value = standingAfter(answer.refusal?.status ?? null)
  if (standing.value !== 'no-contact') history.replaceState(null, '', location.pathname)
}

/** Ends this browser's stay and forgets the race's documents; the owner's link opens it again. */
export async function signOut(): Promise<void> {
  const answer = await tell(`${BASE}/sessions`, { method: 'DELETE' })
  if (answer.value === undefined && answer.refusal.status !== 401) return
  indexedDB.deleteDatabase('stagewatt')
  location.assign('./')
}
