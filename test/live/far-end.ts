import { setTimeout as pause } from 'node:timers/promises'
import type { EndReason, Listener, LiveEvent } from '../../server/live/listener.ts'

/** A listener that keeps what it was told. */
export interface FarEnd extends Listener {
  readonly events: LiveEvent[]
  readonly ends: EndReason[]
  ids(): string[]
  /** What `send` answers from now on. */
  isReady: boolean
}

export function farEnd(linkId: string | null = null): FarEnd {
  const one: FarEnd = {
    linkId,
    events: [],
    ends: [],
    isReady: true,
    ids: () => one.events.map(({ id }) => id),
    send(event) {
      one.events.push(event)
      return one.isReady
    },
    end: (reason) => void one.ends.push(reason),
  }
  return one
}

/** The time until a claim is true; fails when that takes too long. [ms] */
export async function until(claim: () => boolean, withinMs = 5_000): Promise<number> {
  const startedMs = performance.now()
  while (!claim()) {
    if (performance.now() - startedMs > withinMs) throw new Error(`not true within ${withinMs} ms: ${String(claim)}`)
    await pause(1)
  }
  return performance.now() - startedMs
}

/** 'from' … 'to' as the ids of events. */
export const idsBetween = (from: number, to: number): string[] =>
  Array.from({ length: Math.max(to - from + 1, 0) }, (_, n) => String(from + n))
