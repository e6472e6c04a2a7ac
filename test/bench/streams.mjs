import { get } from 'node:http'
import { startService } from './service.mjs'

const RACE = '/api/v1/races/plateau-run'
const DAY = '2026-10-17'

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
  const running = await startService()
  const send = (method, path, body) => running.ask(method, `${RACE}${path}`, body)
  try {
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
