import { existsSync } from 'node:fs'
import { readFile } from 'node:fs/promises'
import { join } from 'node:path'
import { z } from 'zod'
import { checkDocument } from '../documents/check.ts'
import { slug } from '../documents/quantity.ts'
import type { InjectOptions } from 'fastify'
import type { Store } from '../store/store.ts'
import type { Api } from './api.ts'
import { pathOf } from './kinds.ts'

const manifest = z.array(
  z.strictObject({
    kind: z.enum(['car', 'route', 'race', 'sky']),
    id: slug('id to save under'),
    file: z.string().regex(/^[\w.-]+$/, 'a file name beside the manifest'),
    contentType: z.string(),
    query: z.record(z.string(), z.string()).optional(),
  }),
)

type Entry = z.output<typeof manifest>[number]

const BUSY_TRIES = 60
const BUSY_PAUSE_MS = 500

/** The service as somebody reaches it without a network. */
export interface Door {
  inject(request: InjectOptions & { url: string }): Promise<{ statusCode: number; body: string }>
}

/** The service as it reaches itself, by its own secret. */
export const ownDoor = (app: Api, ownToken: string): Door => ({
  inject: (request) => app.inject({ ...request, headers: { ...request.headers, authorization: `Bearer ${ownToken}` } }),
})

/**
 * Offers the demo race on an empty store: saves the files of `demo.json`, in order, through the same
 * doors that a person uses. What goes wrong is said and stops nothing.
 *
 * @param warn  told one readable line
 * @returns documents saved
 */
export async function loadDemo(
  app: Door,
  store: Store,
  demoDir: string,
  warn: (line: string) => void,
): Promise<number> {
  const path = join(demoDir, 'demo.json')
  if (!existsSync(path) || !(await store.isEmpty())) return 0
  let saved = 0
  try {
    const { document: entries, problems } = checkDocument(manifest, JSON.parse(await readFile(path, 'utf8')))
    if (problems !== undefined) throw new Error(problems.map(({ field, detail }) => `${field}: ${detail}`).join('; '))
    for (const entry of entries) if (await saveEntry(app, entry, demoDir)) saved++
  } catch (error) {
    warn(`The demo race could not be loaded: ${error instanceof Error ? error.message : String(error)}`)
  }
  return saved
}

/** False where another process that starts at the same time was faster. */
async function saveEntry(app: Door, { kind, id, file, contentType, query }: Entry, demoDir: string): Promise<boolean> {
  const request = {
    method: 'PUT' as const,
    url: `/api/v1/${pathOf(kind)}/${id}`,
    query: query ?? {},
    headers: { 'content-type': contentType },
    payload: await readFile(join(demoDir, file)),
  }
  let answer = await app.inject(request)
  // Starting holds up the event loop for longer than the service allows its guests on a busy machine.
  for (let tries = 0; answer.statusCode === 503 && tries < BUSY_TRIES; tries++) {
    await new Promise((later) => setTimeout(later, BUSY_PAUSE_MS))
    answer = await app.inject(request)
  }
  if (answer.statusCode === 428) return false
  if (answer.statusCode === 201) return true
  throw new Error(`${file} was answered ${answer.statusCode}: ${answer.body.slice(0, 500)}`)
}
