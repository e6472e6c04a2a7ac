import { signal } from '@preact/signals'
import { ask, BASE } from './api.ts'
import type { SharedBudget } from './crew-types.ts'
import { eventReader } from './event-stream.ts'
import { type Tie, tieAfter } from './links.ts'

export const tie = signal<Tie>('opening')
export const shared = signal<SharedBudget | null>(null)
export const heardMs = signal(Date.now())

const AGAIN_MS = 2000
/** The stream shows a sign of life every 15 s; three missed ones mean that it is dead. */
const SILENT_MS = 45_000

/** Shows the day behind a share link and keeps to it until the link ends. */
export function followShare(token: string): void {
  void keepTo({ authorization: `Bearer ${token}` })
}

const wait = (ms: number): Promise<void> => new Promise((done) => setTimeout(done, ms))

async function keepTo(headers: Record<string, string>): Promise<void> {
  let lastId: string | null = null
  while (tie.value !== 'ended') {
    await load(headers)
    if (isOver(tie.value)) return
    lastId = await listen(headers, lastId)
    if (isOver(tie.value)) return
    await wait(AGAIN_MS)
  }
}

const isOver = (now: Tie): boolean => now === 'ended'

async function load(headers: Record<string, string>): Promise<void> {
  const answer = await ask<SharedBudget>(`${BASE}/share/budget`, { headers, cache: 'no-store' })
  if (answer.value === undefined) {
    fall(tieAfter(answer.refusal.status, answer.refusal.code))
    return
  }
  shared.value = answer.value
  heardMs.value = Date.now()
  tie.value = 'live'
}

/** What a link that ended showed is not kept. */
function fall(to: Tie): void {
  tie.value = to
  if (to === 'ended') shared.value = null
}

/** Reads the stream until it ends; every event is a reason to ask for the day again. */
async function listen(headers: Record<string, string>, lastId: string | null): Promise<string | null> {
  const ended = new AbortController()
  let timer = setTimeout(() => ended.abort(), SILENT_MS)
  let last = lastId
  try {
    const resume: Record<string, string> = last === null ? {} : { 'last-event-id': last }
    const response = await fetch(`${BASE}/share/events`, { headers: { ...headers, ...resume }, signal: ended.signal })
    if (!response.ok || response.body === null) {
      fall(tieAfter(response.status))
      return last
    }
    const read = eventReader()
    const pieces = response.body.pipeThrough(new TextDecoderStream()).getReader()
    for (let piece = await pieces.read(); !piece.done; piece = await pieces.read()) {
      clearTimeout(timer)
      timer = setTimeout(() => ended.abort(), SILENT_MS)
      heardMs.value = Date.now()
      const events = read(piece.value)
      last = events.findLast((event) => event.id !== null)?.id ?? last
      if (events.length > 0) await load(headers)
      if (isOver(tie.value)) return last
    }
  } catch {
    // Lost contact: the loop opens the stream again after the last event.
  } finally {
    clearTimeout(timer)
    ended.abort()
  }
  if (!isOver(tie.value)) tie.value = 'lost'
  return last
}
