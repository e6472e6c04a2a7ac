import { signal } from '@preact/signals'
import { BASE, json, type Refusal, tell } from './api.ts'

/** Whether this browser may look in: null until the service said so. */
export type Standing = 'inside' | 'outside' | 'spent' | 'no-contact' | null

export const standing = signal<Standing>(null)

/** The owner’s token in the fragment of an address, where no server’s log sees it; null without one. */
export const ownerToken = (hash: string): string | null => /^#owner=([\w-]+)$/.exec(hash)?.[1] ?? null

/** What a refused sign-in means for the person who holds the link. */
export const standingAfter = (refusal: Refusal | undefined): Standing =>
  refusal === undefined ? 'inside' : refusal.status === 0 || refusal.status >= 500 ? 'no-contact' : 'spent'

/** Exchanges the link in the address for a cookie, then takes it out of the address and the history. */
export async function signIn(): Promise<void> {
  const token = ownerToken(location.hash)
  if (token === null) return
  const answer = await tell(`${BASE}/sessions`, { method: 'POST', ...json({ token }) })
  standing.value = standingAfter(answer.refusal)
  if (standing.value !== 'no-contact') history.replaceState(null, '', location.pathname)
}
