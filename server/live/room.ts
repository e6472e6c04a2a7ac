import { type EndReason, type Listener, type LiveEvent, type Place, placeOf } from './listener.ts'
import { MISSED } from './topics.ts'

/** Where events are kept; each topic counts its own without a hole. */
export interface EventLog {
  append(topic: string, kind: string, data: unknown): Promise<string>
  last(topic: string): Promise<string>
  since(topic: string, lastId: string, limit: number): Promise<LiveEvent[]>
}

/** Events read at a time. */
const PAGE = 200

/** The listeners of one topic in this process. */
export interface Room {
  readonly places: ReadonlySet<Place>
  /** @param lastId  the last event that the listener had; null to begin with the next one */
  enter(listener: Listener, lastId: number | null): { place: Place; entered: Promise<void>; drained: () => void }
  /** Reads what is new and hands it to all; events that come meanwhile are read in the same go. */
  wake(): void
  end(reason: EndReason): void
}

/**
 * Reads a topic's new events once for all listeners. One that resumes or was slow reads on from its own last
 * event until it has caught up. When reading fails, all end with 'failed': they come back and resume.
 *
 * @param onEmpty  called when the last listener has gone
 */
export function room(topic: string, log: EventLog, slowMs: number, onEmpty: () => void): Room {
  const places = new Set<Place>()
  let lastId: number | null = null
  let isStale = false
  let isReading = false

  const end = (reason: EndReason): void => {
    for (const place of places) place.end(reason)
  }
  const fetch = (after: number): Promise<LiveEvent[]> => log.since(topic, String(after), PAGE)

  /** The last event that live listeners were sent: at first, the last that there is. */
  const known = async (): Promise<number> => {
    if (lastId !== null) return lastId
    const last = Number(await log.last(topic))
    // Another reader may have set it meanwhile, and listeners may be live since.
    return (lastId ??= last)
  }

  const readNew = async (): Promise<void> => {
    let after = await known()
    for (;;) {
      const events = await fetch(after)
      if (events.length > 0) lastId = after = Number(events[events.length - 1].id)
      for (const place of places) if (place.isLive) place.send(events)
      if (events.length < PAGE) return
    }
  }

  const wake = (): void => {
    isStale = true
    if (!isReading) void readAll()
  }
  const readAll = async (): Promise<void> => {
    isReading = true
    try {
      while (isStale) {
        isStale = false
        await readNew()
      }
    } catch {
      lastId = null
      end('failed')
    } finally {
      isReading = false
    }
  }

  /** Brings one place up to the room's last event; it is live afterwards, unless it paused on the way. */
  const catchUp = async (place: Place): Promise<void> => {
    while (!place.isOver && !place.isPaused && !place.isLive) {
      // Asked anew: a listener that comes from another process may be ahead of what is known here.
      const last = Number(await log.last(topic))
      lastId ??= last
      place.lastId ??= last
      const events = place.lastId === last ? [] : await fetch(place.lastId)
      tellMissed(place, events, last)
      place.send(events)
      const isUpToDate = events.length < PAGE && place.lastId >= lastId
      place.isLive = isUpToDate && !place.isPaused && !place.isOver
    }
  }
  const catchUpOrEnd = (place: Place): Promise<void> => catchUp(place).catch(() => place.end('failed'))

  return {
    places,
    enter(listener, from) {
      const place = placeOf(listener, from, slowMs, () => {
        places.delete(place)
        if (places.size === 0) onEmpty()
      })
      places.add(place)
      const drained = (): void => {
        if (!place.isPaused || place.isOver) return
        place.resume()
        void catchUpOrEnd(place)
      }
      return { place, entered: catchUpOrEnd(place), drained }
    },
    wake,
    end,
  }
}

/** Says so when the events after a listener's last one are not there: pruned, or of a database put back since. */
function tellMissed(place: Place, events: LiveEvent[], last: number): void {
  const had = place.lastId ?? last
  const first = events.length > 0 ? Number(events[0].id) : last + 1
  if (had === first - 1 || (events.length === 0 && had === last)) return
  place.lastId = first - 2
  place.send([{ id: String(first - 1), kind: MISSED, data: null, at: new Date().toISOString() }])
}
