import { spawn } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { get } from 'node:http'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'

const START = fileURLToPath(new URL('../../server/start.mjs', import.meta.url))
const RACE = '/api/v1/races/plateau-run'
const DAY = '2026-10-17'

/** A service on a folder of its own: its address, its owner's token, and how to end it. */
async function service() {
  const dataDir = mkdtempSync(join(tmpdir(), 'stagewatt-bench-'))
  const child = spawn(process.execPath, [START], {
    env: { ...process.env, DATA_DIR: dataDir, PORT: '0', DATABASE_URL: '' },
    stdio: ['ignore', 'pipe', 'inherit'],
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
  const stop = async () => {
    child.kill('SIGTERM')
    await ended
    rmSync(dataDir, { recursive: true, force: true })
  }
  return { origin, headers: { authorization: `Bearer ${token}`, 'content-type': 'application/json' }, stop }
}

/** An open stream: resolves `heard` with the instant at which a forecast reached it. */
function listen({ origin, headers }) {
  let hear
  const heard = new Promise((resolve) => {
    hear = resolve
  })
  const opened = new Promise((resolve, reject) => {
    get(`${origin}${RACE}/days/${DAY}/events`, { headers, agent: false }, (answer) => {
      if (answer.statusCode !== 200) reject(new Error(`a stream was answered ${answer.statusCode}`))
      let text = ''
      answer.on('data', (chunk) => {
        text += chunk
        if (text.includes('event: forecast\n')) hear(performance.now())
        if (text.startsWith('retry:')) resolve(answer)
      })
      answer.on('error', () => undefined)
    }).on('error', reject)
  })
  return { opened, heard }
}

/**
 * Opens streams on a day, sends a reading that moves its budget, and times from the sending to each stream's news.
 *
 * @param {number} count  streams
 * @returns ms from the sending to the first stream that heard, from there to the 99th of 100, and both together
 */
export async function streamsBench(count = 500) {
  const running = await service()
  try {
    const send = async (method, path, body) => {
      const answer = await fetch(`${running.origin}${RACE}${path}`, {
        method,
        headers: running.headers,
        body: JSON.stringify(body),
      })
      if (!answer.ok) throw new Error(`${method} ${path}: ${answer.status} ${await answer.text()}`)
      return answer.json()
    }
    const speeds = { kind: 'constant', speedKmh: 80 }
    await send('PUT', `/days/${DAY}/choice`, { carId: 'weaver-2', skyId: 'plateau-forecast', speeds })
    const streams = Array.from({ length: count }, () => listen(running))
    const answers = await Promise.all(streams.map((stream) => stream.opened))
    const sentMs = performance.now()
    await send('POST', '/readings', {
      id: '0b0f4c9e-5a52-4c1e-8a55-6d1c1c3f0a11',
      tracker: 'Tail tracker',
      at: `${DAY}T10:40:00+02:00`,
      inputV: 44,
      inputA: 5,
      outputV: 112,
      outputA: 1.86,
    })
    const heardMs = (await Promise.all(streams.map((stream) => stream.heard))).sort((a, b) => a - b)
    for (const answer of answers) answer.destroy()
    const p99 = heardMs[Math.ceil(count * 0.99) - 1]
    return { count, firstMs: heardMs[0] - sentMs, spreadMs: p99 - heardMs[0], p99Ms: p99 - sentMs }
  } finally {
    await running.stop()
  }
}
