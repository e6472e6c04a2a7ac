import type { StoredEvent } from '../store/event-store.ts'

/** Somebody who watches a topic. */
export interface Listener {
  /** The link by which it listens; null for the service itself. */
  linkId: string | null
  /** Takes an event; false when more than it can take is waiting. */
  send(event: StoredEvent): boolean
  end(reason: string): void
}

/** What routes need of whoever tells events to those who watch. */
export interface Live {
  /** Keeps an event and tells it in every process. @returns its id */
  publish(topic: string, kind: string, data: unknown): Promise<string>
  /** Tells a listener everything after `lastId`, or from now on. @returns stops that */
  subscribe(topic: string, lastId: string | null, listener: Listener): Promise<() => void>
  /** Ends the streams opened by a link, in every process. */
  endStreamsOf(linkId: string): Promise<void>
}
