import { spawn, type ChildProcess } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'

const ROOT = fileURLToPath(new URL('../..', import.meta.url))
const READY_MS = 120_000

export interface Service {
  url: string
  stop(): Promise<void>
}

/** The service as people start it, on a free port, with a store of its own that goes when it stops. */
export async function startService(): Promise<Service> {
  const folder = mkdtempSync(join(tmpdir(), 'stagewatt-browser-'))
  const child = spawn(process.execPath, ['server/start.mjs'], {
    cwd: ROOT,
    env: { ...process.env, DATABASE_URL: '', DATA_DIR: join(folder, 'data'), PORT: '0', HOST: '127.0.0.1' },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  const stop = async (): Promise<void> => {
    const ended = child.exitCode === null ? new Promise((done) => child.once('exit', done)) : null
    child.kill('SIGTERM')
    await ended
    rmSync(folder, { recursive: true, force: true })
  }
  try {
    return { url: await addressOf(child), stop }
  } catch (error) {
    await stop()
    throw error
  }
}

/** The address that the service prints once it answers. */
function addressOf(child: ChildProcess): Promise<string> {
  return new Promise((found, failed) => {
    let output = ''
    const timer = setTimeout(() => failed(new Error(`no address within ${READY_MS} ms:\n${output}`)), READY_MS)
    const take = (chunk: Buffer): void => {
      output += chunk.toString()
      const address = /https?:\/\/[\w.:-]+/.exec(output.split('\n').find((line) => line.includes(' is at ')) ?? '')
      if (address === null) return
      clearTimeout(timer)
      found(address[0])
    }
    child.stdout?.on('data', take)
    child.stderr?.on('data', take)
    child.once('exit', (code) => {
      clearTimeout(timer)
      failed(new Error(`the service ended with ${code}:\n${output}`))
    })
  })
}
