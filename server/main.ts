import { existsSync, readFileSync } from 'node:fs'
import { join, resolve } from 'node:path'
import closeWithGrace from 'close-with-grace'
import { hashOf, newToken } from './api/access.ts'
import { type Api } from './api/api.ts'
import { loadDemo, ownDoor } from './api/demo-load.ts'
import { renewOutdated } from './api/followed.ts'
import { buildApp } from './app.ts'
import type { JOBS } from './compute/jobs.ts'
import { computePool } from './compute/pool.ts'
import { type Config, readConfig, reachOf } from './config.ts'
import { openHub } from './live/hub.ts'
import { openDatabase } from './store/database.ts'
import { migrate } from './store/migrate.ts'
import { notices } from './store/notices.ts'
import { type Store, store as storeOf } from './store/store.ts'
import { StoreError } from './store/store-error.ts'

/** The project's folder: this file runs as dist/server/main.js. */
const ROOT = resolve(import.meta.dirname, '..', '..')
/** Time for requests to finish when the service is told to stop. [ms] */
const STOP_MS = 10_000

/** Something that keeps the service from starting, in words for whoever starts it. */
class CannotStart extends Error {}

const warn = (line: string): void => void process.stderr.write(`${line}\n`)

/** What to close when the service stops, last opened first. */
const open: (() => Promise<unknown>)[] = []

async function closeAll(): Promise<void> {
  for (let close = open.pop(); close !== undefined; close = open.pop()) await close()
}

/** What a started service says. */
interface Started {
  address: string
  /** Told once, at the first start. */
  ownerToken: string | null
}

async function serve(config: Config): Promise<Started> {
  const tls = readTls(config)
  const database = await openDatabase({
    ...(config.databaseUrl === null ? {} : { url: config.databaseUrl }),
    dataDir: config.dataDir,
    workerUrl: new URL('./store/embedded-worker.js', import.meta.url),
  })
  open.push(() => database.close())
  const compute = computePool<typeof JOBS>({
    workerUrl: new URL('./compute/worker.js', import.meta.url),
    size: config.computeWorkers,
    timeLimitMs: config.computeLimitMs,
  })
  open.push(() => compute.close())
  await migrate(database.sql, join(ROOT, 'migrations'))
  const store = storeOf(database.sql)
  const isRevoked = async (id: string): Promise<boolean> => (await store.links.get(id))?.isRevoked ?? true
  const live = await openHub({ events: store.events, notices: notices(database), isRevoked })
  open.push(() => live.close())
  forgetOld(store)
  const { host, publicOrigin, logLevel } = config
  const webDir = existsSync(join(ROOT, 'dist', 'web')) ? join(ROOT, 'dist', 'web') : null
  const docsCss = join(ROOT, 'server', 'api', 'docs.css')
  const version = versionOf(readFileSync(join(ROOT, 'package.json'), 'utf8'))
  const ownToken = newToken()
  const parts = { store, compute, live, version, host, publicOrigin, ownToken, tls, webDir, docsCss, logLevel }
  const app = await buildApp(parts)
  open.push(() => app.close())
  await loadDemo(ownDoor(app, ownToken), store, join(ROOT, 'server', 'demo'), warn)
  await listen(app, config)
  renewOutdated(parts).catch((error: unknown) =>
    warn(`Budgets of an earlier engine were not renewed: ${String(error)}`),
  )
  return { address: publicOrigin ?? addressOf(app, config), ownerToken: await firstOwner(store) }
}

/** Streams that were away for longer ask anew for all that they show. */
const KEPT_DAYS = 3
const DAY_MS = 24 * 3600 * 1000

/** Forgets events and sessions that nobody comes back to, now and every day. */
function forgetOld({ events, sessions }: Store): void {
  const forget = (): void => {
    const done = Promise.all([events.prune(new Date(Date.now() - KEPT_DAYS * DAY_MS)), sessions.prune()])
    done.catch((error: unknown) => warn(`Old events were not forgotten: ${String(error)}`))
  }
  forget()
  setInterval(forget, DAY_MS).unref()
}

/** The token of the owner's link where none was ever made. */
async function firstOwner({ links }: Store): Promise<string | null> {
  const token = newToken()
  return (await links.createOwner(hashOf(token))) === null ? null : token
}

function versionOf(packageJson: string): string {
  const { version }: { version: string } = JSON.parse(packageJson)
  return version
}

function readTls({ tls }: Config): { cert: Buffer; key: Buffer } | null {
  if (tls === null) return null
  const read = (name: string, path: string): Buffer => {
    try {
      return readFileSync(path)
    } catch (error) {
      throw new CannotStart(`${name}: ${path} cannot be read (${codeOf(error)}).`)
    }
  }
  return { cert: read('TLS_CERT', tls.certPath), key: read('TLS_KEY', tls.keyPath) }
}

async function listen(app: Api, { host, port }: Config): Promise<void> {
  try {
    await app.listen({ host, port })
  } catch (error) {
    const reasons: Record<string, string> = {
      EADDRINUSE: `Port ${port} on ${host} is in use. Stop what uses it, or set PORT to another.`,
      EACCES: `Port ${port} on ${host} may not be used by this user. Set PORT to one above 1023.`,
      EADDRNOTAVAIL: `HOST ${host} is no address of this machine.`,
      ENOTFOUND: `HOST ${host} is not known.`,
    }
    throw new CannotStart(reasons[codeOf(error)] ?? `The service cannot listen on ${host}:${port} (${codeOf(error)}).`)
  }
}

const codeOf = (error: unknown): string =>
  error instanceof Error && 'code' in error ? String(error.code) : String(error)

function addressOf(app: Api, { host, tls }: Config): string {
  const address = app.server.address()
  const port = typeof address === 'object' ? address?.port : address
  const isAnywhere = host === '0.0.0.0' || host === '::'
  const name = isAnywhere ? 'localhost' : host.includes(':') ? `[${host}]` : host
  return `${tls === null ? 'http' : 'https'}://${name}:${port}`
}

/** TLS files that hold no certificate are refused by the library, whose words are plain enough. */
function reasonOf(error: unknown): string {
  if (error instanceof CannotStart || error instanceof StoreError) return error.message
  const isTls = codeOf(error).startsWith('ERR_OSSL') || codeOf(error).startsWith('ERR_SSL')
  if (isTls && error instanceof Error) return `TLS_CERT or TLS_KEY is not as expected: ${error.message}.`
  return error instanceof Error ? (error.stack ?? error.message) : String(error)
}

const { config, problems } = readConfig(process.env, process.cwd())
if (config === undefined) {
  problems.forEach(warn)
  process.exit(2)
}
closeWithGrace({ delay: STOP_MS, logger: { error: (line: unknown) => warn(String(line)) } }, async ({ err }) => {
  if (err !== undefined) warn(err.stack ?? err.message)
  await closeAll()
})
try {
  const { address, ownerToken } = await serve(config)
  process.stdout.write(`Stagewatt is at ${address}\n`)
  if (ownerToken !== null) process.stdout.write(`Owner's link: ${address}/#owner=${ownerToken}\n`)
  for (const line of reachOf(config)) process.stdout.write(`${line}\n`)
} catch (error) {
  warn(reasonOf(error))
  await closeAll()
  process.exit(1)
}
