import { spawn } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'

const START = fileURLToPath(new URL('../../server/start.mjs', import.meta.url))
const PROBE = new URL('./delay-probe.mjs', import.meta.url).href

/** A service on a folder of its own: its address, its owner's headers, its event loop's delay, and how to end it. */
export async function startService() {
  const dataDir = mkdtempSync(join(tmpdir(), 'stagewatt-bench-'))
  const child = spawn(process.execPath, ['--import', PROBE, START], {
    env: { ...process.env, DATA_DIR: dataDir, PORT: '0', DATABASE_URL: '', COMPUTE_LIMIT_S: '600' },
    stdio: ['ignore', 'pipe', 'inherit', 'ipc'],
  })
  const ended = new Promise((resolve) => child.once('exit', resolve))
  let out = ''
  const [origin, token] = await new Promise((resolve, reject) => {
    child.once('exit', () => reject(new Error(`the service ended: ${out}`)))
    child.stdout.on('data', (chunk) => {
      out += chunk
      const found = /Stagewatt is at (\S+)\n[\s\S]*#owner=(\S+)\n/.exec(out)
      if (found !== null) resolve([found[1], found[2]])
    })
  })
  const headers = { authorization: `Bearer ${token}`, 'content-type': 'application/json' }
  /** Delay of the event loop since the last call. */
  const delay = () =>
    new Promise((resolve) => {
      child.once('message', resolve)
      child.send('delay')
    })
  const ask = async (method, path, body) => {
    const answer = await fetch(`${origin}${path}`, { method, headers, body: body && JSON.stringify(body) })
    if (!answer.ok) throw new Error(`${method} ${path}: ${answer.status} ${await answer.text()}`)
    return answer.json()
  }
  const stop = async () => {
    child.kill('SIGTERM')
    await ended
    rmSync(dataDir, { recursive: true, force: true })
  }
  return { origin, headers, ask, delay, stop }
}
