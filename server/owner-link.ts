import { resolve, join } from 'node:path'
import { hashOf, newToken } from './api/access.ts'
import { type Config, readConfig } from './config.ts'
import { LINKS } from './live/topics.ts'
import { openDatabase } from './store/database.ts'
import { migrate } from './store/migrate.ts'
import { StoreError } from './store/store-error.ts'
import { store as storeOf } from './store/store.ts'

/** The project's folder: this file runs as dist/server/owner-link.js. */
const ROOT = resolve(import.meta.dirname, '..', '..')

const warn = (line: string): void => void process.stderr.write(`${line}\n`)

/** Makes a new owner's link in place of the one that was lost; who came in by that one is signed out. */
async function newOwner(config: Config): Promise<string> {
  const database = await openDatabase({
    ...(config.databaseUrl === null ? {} : { url: config.databaseUrl }),
    dataDir: config.dataDir,
    workerUrl: new URL('./store/embedded-worker.js', import.meta.url),
  })
  try {
    await migrate(database.sql, join(ROOT, 'migrations'))
    const token = newToken()
    const { links, events } = storeOf(database.sql)
    const { revoked } = await links.replaceOwner(hashOf(token))
    for (const linkId of revoked) await events.append(LINKS, 'revoked', { linkId })
    return token
  } finally {
    await database.close()
  }
}

function addressOf({ host, port, publicOrigin, tls }: Config): string {
  if (publicOrigin !== null) return publicOrigin
  const isAnywhere = host === '0.0.0.0' || host === '::'
  const name = isAnywhere ? 'localhost' : host.includes(':') ? `[${host}]` : host
  return `${tls === null ? 'http' : 'https'}://${name}:${port}`
}

const { config, problems } = readConfig(process.env, process.cwd())
if (config === undefined) {
  problems.forEach(warn)
  process.exit(2)
}
try {
  process.stdout.write(`Owner's link: ${addressOf(config)}/#owner=${await newOwner(config)}\n`)
} catch (error) {
  if (!(error instanceof StoreError)) throw error
  warn(error.message)
  process.exitCode = 1
}
