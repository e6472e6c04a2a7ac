import { spawn, type ChildProcess } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'

const ROOT = fileURLToPath(new URL('../..', import.meta.url))
const READY_MS = 120_000

type Init = Omit<RequestInit, 'headers'> & { headers?: Record<string, string> }

export interface Service {
  url: string
  /** The link that the first start prints, with its token after #. */
  ownerLink: string
  /** Asks the service as the owner does. */
  ask(path: string, init?: Init): Promise<Response>
  stop(): Promise<void>
}

/** The service as people start it, on a free port, with a store of its own that goes when it stops. */
export async function startService(): Promise<Service> {
  const folder = mkdtempSync(join(tmpdir(), 'stagewatt-browser-'))
  const child = spawn(process.execPath, ['server/start.mjs'], {
    cwd: ROOT,
    env: {
      ...process.env,
      DATABASE_URL: '',
      DATA_DIR: join(folder, 'data'),
      PORT: '0',
      HOST: '127.0.0.1',
      COMPUTE_LIMIT_S: '120',
    },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  const stop = async (): Promise<void> => {
    const ended = child.exitCode === null ? new Promise((done) => child.once('exit', done)) : null
    child.kill('SIGTERM')
    await ended
    rmSync(folder, { recursive: true, force: true })
  }
  try {
    const { url, ownerLink } = await startedBy(child)
    const authorization = `Bearer ${ownerLink.split('#owner=')[1]}`
    const ask = (path: string, init: Init = {}): Promise<Response> =>
      fetch(`${url}${path}`, { ...init, headers: { ...init.headers, authorization } })
    return { url, ownerLink, ask, stop }
  } catch (error) {
    await stop()
    throw error
  }
}

/** The address and the owner's link that the service prints once it answers. */
function startedBy(child: ChildProcess): Promise<Pick<Service, 'url' | 'ownerLink'>> {
  return new Promise((found, failed) => {
    let output = ''
    const timer = setTimeout(() => failed(new Error(`no owner's link within ${READY_MS} ms:\n${output}`)), READY_MS)
    const take = (chunk: Buffer): void => {
      output += chunk.toString()
      const url = /^Stagewatt is at (https?:\/\/\S+)$/m.exec(output)?.[1]
      const ownerLink = /^Owner's link: (https?:\/\/\S+)$/m.exec(output)?.[1]
      if (url === undefined || ownerLink === undefined) return
      clearTimeout(timer)
      found({ url, ownerLink })
    }
    child.stdout?.on('data', take)
    child.stderr?.on('data', take)
    child.once('exit', (code) => {
      clearTimeout(timer)
      failed(new Error(`the service ended with ${code}:\n${output}`))
    })
  })
}
