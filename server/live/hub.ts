import type { Listener, Place } from './listener.ts'
import { type EventLog, type Room, room } from './room.ts'
import { LINKS, MISSED } from './topics.ts'

export interface HubParts {
  events: EventLog
  /** Word from other processes: of a topic's new event, or that some word may have been missed. */
  notices: { hear(onTopic: (topic: string) => void, onAll: () => void): Promise<() => Promise<void>> }
  /** Asked once per stream that a link opens, so that none stays open that began while its link was revoked. */
  isRevoked(linkId: string): Promise<boolean>
  /** How long a listener may take no events before it is dropped. [ms] (default 10 s) */
  slowMs?: number
}

export interface Subscription {
  /** Resolves when all up to now was sent and what comes next will be; also when it ended. Never rejects. */
  joined: Promise<void>
  /** To be called when a listener whose `send` gave false takes events again. */
  drained(): void
  /** The listener goes; its `end` is not called. */
  leave(): void
}

export interface Hub {
  /** Adds an event for every listener of the topic, in every process; its id. */
  publish(topic: string, kind: string, data: unknown): Promise<string>
  /** @param lastId  the last event that the listener had; null, or no id at all, to begin with the next one */
  subscribe(topic: string, lastId: string | null, listener: Listener): Subscription
  /** Ends the streams that a revoked link opened, in every process. */
  endStreamsOf(linkId: string): Promise<void>
  listenerCount(): number
  /** Ends all streams with 'stopping'. */
  close(): Promise<void>
}

const SLOW_MS = 10_000
const AGAIN_MS = 1_000

/**
 * Streams of events by topic, for the listeners of this process: each event once and in order, from the one
 * after the listener's last. Events are kept by `events`; `notices` says that another process added one.
 */
export async function openHub(parts: HubParts): Promise<Hub> {
  const { events, notices, slowMs = SLOW_MS } = parts
  const rooms = new Map<string, Room>()
  let isClosed = false
  let timer: NodeJS.Timeout | undefined

  const roomOf = (topic: string): Room => {
    const found = rooms.get(topic)
    if (found !== undefined) return found
    const made: Room = room(topic, events, slowMs, () => {
      if (rooms.get(topic) === made) rooms.delete(topic)
    })
    rooms.set(topic, made)
    return made
  }
  const places = (): Place[] => Array.from(rooms.values(), (one) => [...one.places]).flat()
  const endLocal = (linkId: string): void => {
    for (const place of places()) if (place.listener.linkId === linkId) place.end('revoked')
  }

  /** Hears of revoked links, from the last word on when it must begin again. */
  const hearOfLinks = (lastId: string): Promise<void> => {
    let last = lastId
    const listener: Listener = {
      linkId: null,
      send({ id, kind, data }) {
        last = id
        if (kind === MISSED) for (const place of places()) if (place.listener.linkId !== null) place.end('failed')
        endLocal(linkIdIn(data))
        return true
      },
      end() {
        if (!isClosed) timer = setTimeout(() => void hearOfLinks(last), AGAIN_MS)
      },
    }
    return roomOf(LINKS).enter(listener, numberOf(lastId)).entered
  }

  const check = async (place: Place, linkId: string | null): Promise<void> => {
    if (linkId === null) return
    try {
      if (await parts.isRevoked(linkId)) place.end('revoked')
    } catch {
      place.end('failed')
    }
  }

  const publish: Hub['publish'] = async (topic, kind, data) => {
    const id = await events.append(topic, kind, data)
    rooms.get(topic)?.wake()
    return id
  }

  await hearOfLinks(await events.last(LINKS))
  const stopHearing = await notices.hear(
    (topic) => rooms.get(topic)?.wake(),
    () => {
      for (const one of rooms.values()) one.wake()
    },
  )

  return {
    publish,

    subscribe(topic, lastId, listener) {
      const { place, entered, drained } = roomOf(topic).enter(listener, numberOf(lastId))
      if (isClosed) place.end('stopping')
      const joined = both(entered, check(place, listener.linkId))
      return { joined, drained, leave: () => place.leave() }
    },

    async endStreamsOf(linkId) {
      await publish(LINKS, 'revoked', { linkId })
      endLocal(linkId)
    },

    listenerCount: () => places().length - (rooms.get(LINKS)?.places.size ?? 0),

    async close() {
      isClosed = true
      clearTimeout(timer)
      for (const place of places()) place.end('stopping')
      await stopHearing()
    },
  }
}

const both = async (one: Promise<void>, two: Promise<void>): Promise<void> => {
  await Promise.all([one, two])
}

const numberOf = (id: string | null): number | null => (id !== null && /^\d{1,15}$/.test(id) ? Number(id) : null)

const linkIdIn = (data: unknown): string =>
  typeof data === 'object' && data !== null && 'linkId' in data ? String(data.linkId) : ''
