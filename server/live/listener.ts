/** Something that happened in a topic, as it is kept. */
export interface LiveEvent {
  /** Counts 1, 2, 3 … within its topic; to resume after it. */
  id: string
  kind: string
  data: unknown
  /** ISO 8601 in UTC. */
  at: string
}

/**
 * Why a stream ended: its link was revoked; it took too long; its sending or reading failed (it may come
 * back and resume); the service stops.
 */
export type EndReason = 'revoked' | 'slow' | 'failed' | 'stopping'

/** The far end of a stream. */
export interface Listener {
  /** The link that opened it, so that it ends when that is revoked; null for none. */
  linkId: string | null
  /** Takes an event; false when it wants no more until `drained` is called. The same object goes to all listeners. */
  send(event: LiveEvent): boolean
  /** Called once, when the hub ends it; not when it leaves by itself. */
  end(reason: EndReason): void
}

/** One listener's place in a topic. */
export interface Place {
  readonly listener: Listener
  /** Number of the last event that it was sent; null until it knows from where it listens. */
  lastId: number | null
  /** True when it is sent events as they come; else it catches up first. */
  isLive: boolean
  /** True when it takes no more for now. */
  isPaused: boolean
  isOver: boolean
  /** Sends events that it has not had, until it wants no more. */
  send(events: readonly LiveEvent[]): void
  /** It takes events again. */
  resume(): void
  leave(): void
  end(reason: EndReason): void
}

/**
 * A listener's place, which drops a listener that stays slow or throws.
 *
 * @param slowMs    how long it may take no events. [ms]
 * @param onGone    called once when it is over, for whatever reason
 */
export function placeOf(listener: Listener, lastId: number | null, slowMs: number, onGone: () => void): Place {
  let timer: NodeJS.Timeout | undefined

  const over = (): boolean => {
    if (place.isOver) return false
    place.isOver = true
    place.isLive = false
    clearTimeout(timer)
    onGone()
    return true
  }
  const sendOne = (event: LiveEvent): void => {
    const number = Number(event.id)
    if (place.isOver || place.isPaused || number <= (place.lastId ?? 0)) return
    place.lastId = number
    try {
      if (listener.send(event)) return
    } catch {
      return place.end('failed')
    }
    place.isPaused = true
    place.isLive = false
    timer = setTimeout(() => place.end('slow'), slowMs)
  }

  const place: Place = {
    listener,
    lastId,
    isLive: false,
    isPaused: false,
    isOver: false,
    send: (events) => events.forEach(sendOne),
    resume() {
      clearTimeout(timer)
      place.isPaused = false
    },
    leave: () => void over(),
    end(reason) {
      if (!over()) return
      try {
        listener.end(reason)
      } catch {
        // Its connection is gone already; the others must not suffer.
      }
    },
  }
  return place
}
