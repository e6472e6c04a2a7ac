import { z } from 'zod'
import { Fault } from '../errors.ts'
import { answers } from './answers.ts'
import type { Api, Needs } from './api.ts'

const OPEN = { access: 'open' } as const

/** Whether the service runs, and whether it can work. */
export function healthRoutes(api: Api, { store, compute, version }: Needs): void {
  const healthSchema = {
    tags: ['service'],
    summary: 'Whether the service runs',
    response: answers(
      { 200: { description: 'it runs', schema: z.strictObject({ status: z.literal('ok'), version: z.string() }) } },
      [],
      'open',
    ),
  }
  api.get('/api/health', { schema: healthSchema, config: OPEN }, async () => ({ status: 'ok', version }))

  const readySchema = {
    tags: ['service'],
    summary: 'Whether the service can work: its database answers, its workers are up',
    response: answers(
      { 200: { description: 'it can', schema: z.strictObject({ status: z.literal('ready') }) } },
      ['store-unavailable', 'busy'],
      'open',
    ),
  }
  api.get('/api/ready', { schema: readySchema, config: OPEN }, async (_request, reply) => {
    reply.header('cache-control', 'no-store')
    if (!compute.isReady()) throw new Fault('busy', 'No worker is up yet.')
    await store.ping().catch((cause: unknown) => {
      throw new Fault('store-unavailable', 'The database does not answer.', { cause })
    })
    return { status: 'ready' }
  })
}
