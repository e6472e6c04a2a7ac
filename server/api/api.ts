import type { IncomingMessage, Server, ServerResponse } from 'node:http'
import type { FastifyBaseLogger, FastifyInstance, FastifyReply } from 'fastify'
import type { ZodTypeProvider } from 'fastify-type-provider-zod'
import type { Compute } from '../compute/jobs.ts'
import type { Hub } from '../live/hub.ts'
import type { Store } from '../store/store.ts'

/** The application as the routes see it: schemas are zod schemas. */
export type Api = FastifyInstance<Server, IncomingMessage, ServerResponse, FastifyBaseLogger, ZodTypeProvider>

/** What the routes need. */
export interface Needs {
  store: Store
  compute: Compute
  live: Pick<Hub, 'publish' | 'subscribe' | 'endStreamsOf'>
  version: string
}

/** Largest body where documents and files come in. [bytes] */
export const DOCUMENT_LIMIT = 24_000_000
/** Largest body of speeds, which may list thousands of sections. [bytes] */
export const SPEEDS_LIMIT = 1_000_000
/** Largest body elsewhere. [bytes] */
export const SMALL_LIMIT = 64_000

/** Why a computation ends for which nobody waits any more: nothing that the service did wrong. */
export class ClientGone extends Error {
  constructor() {
    super('the client went away')
  }
}

/** Aborts when the client goes away before its answer is out. */
export function clientGone(reply: FastifyReply): AbortSignal {
  const gone = new AbortController()
  reply.raw.once('close', () => {
    if (!reply.raw.writableFinished) gone.abort(new ClientGone())
  })
  return gone.signal
}
