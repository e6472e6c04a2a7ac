import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import type { InjectOptions, LightMyRequestResponse } from 'fastify'
import { buildApp, type Parts } from '../../server/app.ts'
import { hashOf, newToken } from '../../server/api/access.ts'
import type { Api } from '../../server/api/api.ts'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import type { Compute, JOBS } from '../../server/compute/jobs.ts'
import { computePool } from '../../server/compute/pool.ts'
import { type Database, openDatabase } from '../../server/store/database.ts'
import { openHub } from '../../server/live/hub.ts'
import { migrate } from '../../server/store/migrate.ts'
import { notices } from '../../server/store/notices.ts'
import { type Store, store as storeOf } from '../../server/store/store.ts'
import { describedAnswers } from './described.ts'

export const projectPath = (path: string): string => fileURLToPath(new URL(`../../${path}`, import.meta.url))
export const builtFile = (path: string): URL => new URL(`../../dist/server/${path}`, import.meta.url)

export type Request = InjectOptions & { url: string }

export interface Service {
  /** The service; what is injected without a token or cookie comes with the owner's. */
  app: Api
  /** The owner's token. */
  token: string
  store: Store
  database: Database
  compute: Compute
  live: Parts['live']
  /** The answer to a request, checked against the description of the API. */
  ask(request: Request): Promise<LightMyRequestResponse>
  /** Another application on the same store and workers. */
  another(parts: Partial<Parts>): Promise<Api>
  close(): Promise<void>
}

/** The service on an embedded database in a folder of its own, with real workers. */
export async function startService(settings: { timeLimitMs?: number } = {}): Promise<Service> {
  const dataDir = mkdtempSync(join(tmpdir(), 'stagewatt-api-'))
  const compute = computePool<typeof JOBS>({
    workerUrl: builtFile('compute/worker.js'),
    size: 2,
    timeLimitMs: settings.timeLimitMs ?? 60_000,
  })
  const opened = await openDatabase({ dataDir, workerUrl: builtFile('store/embedded-worker.js') })
  let closed: Promise<void> | null = null
  const database = { ...opened, close: () => (closed ??= opened.close()) }
  await migrate(database.sql, projectPath('migrations'))
  const store = storeOf(database.sql)
  const isRevoked = async (id: string): Promise<boolean> => (await store.links.get(id))?.isRevoked ?? true
  const live = await openHub({ events: store.events, notices: notices(database), isRevoked })
  const common: Parts = {
    store,
    compute,
    version: '0.0.0-test',
    host: '127.0.0.1',
    publicOrigin: null,
    tls: null,
    live,
    ownToken: newToken(),
    webDir: null,
    docsCss: projectPath('server/api/docs.css'),
    logLevel: 'silent',
    // A busy machine must not fail these tests.
    mostDelayMs: 600_000,
  }
  const token = newToken()
  await store.links.createOwner(hashOf(token))
  const app = signedIn(await buildApp(common), token)
  const wrongAnswer = describedAnswers((await app.inject('/api/openapi.json')).body)
  const others: Api[] = []
  return {
    app,
    token,
    store,
    database,
    compute,
    live,
    async ask(request) {
      const answer = await app.inject(request)
      const type = String(answer.headers['content-type'])
      const { method = 'GET', url } = request
      const wrong = wrongAnswer(method, url, answer.statusCode, type, answer.body)
      if (wrong !== null) throw new Error(wrong)
      return answer
    },
    async another(parts) {
      const other = signedIn(await buildApp({ ...common, ...parts }), token)
      others.push(other)
      return other
    },
    async close() {
      await Promise.all([app, ...others].map((one) => one.close()))
      await compute.close()
      await live.close()
      await database.close()
      rmSync(dataDir, { recursive: true, force: true })
    },
  }
}

/** Gives requests the owner's token where they bring neither token nor cookie, not even an empty one. */
function signedIn(app: Api, token: string): Api {
  const inject = app.inject.bind(app)
  const asOwner = (asked: InjectOptions | string, ...rest: []) => {
    const request = typeof asked === 'string' ? { url: asked } : asked
    const headers = Object.fromEntries(Object.entries({ ...request.headers }))
    if ('cookie' in headers) return inject(request, ...rest)
    const { authorization = 'authorization' in headers ? undefined : `Bearer ${token}`, ...others } = headers
    return inject({ ...request, headers: authorization === undefined ? others : { ...others, authorization } }, ...rest)
  }
  Object.defineProperty(app, 'inject', { value: asOwner })
  return app
}

const COLLECTIONS: Record<string, string> = { car: 'cars', route: 'routes', race: 'races', sky: 'skies' }

/** A request that saves a worked example, or another document, under an id. */
export const saving = (kind: string, id: string, document: object = EXAMPLES[kind].document): Request => ({
  method: 'PUT',
  url: `/api/v1/${COLLECTIONS[kind]}/${id}`,
  headers: { 'content-type': 'application/json' },
  payload: JSON.stringify(document),
})

/** The same request with a version that must still hold. */
export const ifVersion = (request: Request, version: number | string): Request => ({
  ...request,
  headers: { ...request.headers, 'if-match': typeof version === 'number' ? `"${version}"` : version },
})
