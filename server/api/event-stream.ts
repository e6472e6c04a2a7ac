import type { ServerResponse } from 'node:http'
import type { FastifyReply, FastifyRequest } from 'fastify'
import type { LiveEvent } from '../live/listener.ts'
import { MISSED } from '../live/topics.ts'
import type { Needs } from './api.ts'

/** A quiet stream says this often that it lives, so that nothing on the way closes it. [ms] */
const HEARTBEAT_MS = 15_000
/** When a browser that lost the stream comes back. [ms] */
const RETRY_MS = 1_000
/** One event as it stands on the wire (HTML standard, server-sent events). */
export const eventText = ({ id, kind, data }: Pick<LiveEvent, 'id' | 'kind' | 'data'>): string =>
  `id: ${id}\nevent: ${kind}\ndata: ${JSON.stringify(data)}\n\n`

export interface StreamOf {
  topic: string
  /** Kinds that this listener is told of. */
  kinds: readonly string[]
  /** The link by which it listens: its end is the stream's. */
  linkId: string | null
}

/** Streams a topic's events until one of the two sides ends it; it resumes after Last-Event-ID. */
export async function streamEvents(
  { live, open }: Pick<Needs, 'live'> & { open: Set<ServerResponse> },
  request: FastifyRequest,
  reply: FastifyReply,
  { topic, kinds, linkId }: StreamOf,
): Promise<void> {
  const { raw } = reply
  const lastId = lastEventId(request)
  reply.hijack()
  // Gone before its stream began: nothing would ever close it again.
  if (raw.destroyed) return
  const headers = reply.getHeaders()
  raw.writeHead(200, {
    ...Object.fromEntries(Object.entries(headers).filter(([, value]) => value !== undefined)),
    'content-type': 'text/event-stream; charset=utf-8',
    'cache-control': 'no-store',
    'x-accel-buffering': 'no',
    // Kept alive after its end it would keep the service from stopping.
    connection: 'close',
  })
  raw.write(`retry: ${RETRY_MS}\n\n`)
  open.add(raw)
  const beat = setInterval(() => raw.writableEnded || raw.write(':\n\n'), HEARTBEAT_MS)
  raw.once('close', () => {
    clearInterval(beat)
    open.delete(raw)
  })
  const subscription = live.subscribe(topic, lastId, {
    linkId,
    send(event) {
      if (event.kind !== MISSED && !kinds.includes(event.kind)) return true
      return raw.write(eventText(event))
    },
    // A slow listener would take no goodbye either.
    end: (reason) => void (reason === 'slow' ? raw.destroy() : raw.end()),
  })
  raw.on('drain', () => subscription.drained())
  raw.once('close', () => subscription.leave())
  await subscription.joined
}

/** Id of the last event that the listener has had; null where it starts now. */
function lastEventId({ headers }: FastifyRequest): string | null {
  const id = String(headers['last-event-id'] ?? '')
  return /^\d{1,15}$/.test(id) ? id : null
}
