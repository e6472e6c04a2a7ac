import { afterAll, beforeAll, expect, test } from 'vitest'
import { newSchema } from '../store/engines.ts'
import { describeWithPostgres } from '../support/needs.ts'
import { run, stopAll } from './process.ts'

const DAY = '2026-10-17'
const RACE = '/api/v1/races/plateau-run'

describeWithPostgres('two services on one PostgreSQL server', { timeout: 120_000 }, () => {
  let schema: Awaited<ReturnType<typeof newSchema>>
  let first: string
  let second: string
  let headers: Record<string, string>

  beforeAll(async () => {
    schema = await newSchema()
    const env = { PORT: '0', DATABASE_URL: schema.url, COMPUTE_WORKERS: '1' }
    const one = run([process.execPath, 'dist/server/main.js'], env)
    first = await one.address()
    headers = { authorization: `Bearer ${await one.ownerToken()}`, 'content-type': 'application/json' }
    second = await run([process.execPath, 'dist/server/main.js'], env).address()
  }, 120_000)
  afterAll(async () => {
    stopAll()
    await schema.drop()
  })

  const send = async (origin: string, method: string, path: string, body: object) => {
    const answer = await fetch(`${origin}${RACE}${path}`, { method, headers, body: JSON.stringify(body) })
    expect(answer.ok, await answer.clone().text()).toBe(true)
    return answer.json()
  }

  test('a reading posted to one reaches a stream of the other within a second of its answer', async () => {
    const choice = {
      carId: 'weaver-2',
      skyId: 'plateau-forecast',
      speeds: { kind: 'constant', speedKmh: 80 },
    }
    await send(first, 'PUT', `/days/${DAY}/choice`, choice)
    const stream = await fetch(`${second}${RACE}/days/${DAY}/events`, { headers })
    expect(stream.status).toBe(200)
    const heard = hear(stream, 'reading')
    const reading = {
      id: '6f1d7f0e-7d7b-4c51-9a3b-0d3f6a4c2b10',
      tracker: 'Tail tracker',
      at: `${DAY}T10:40:00+02:00`,
      inputV: 44,
      inputA: 5,
      outputV: 112,
      outputA: 1.86,
    }
    const answered = send(first, 'POST', '/readings', reading).then((answer) => ({ answer, atMs: performance.now() }))
    const [{ answer, atMs }, event] = await Promise.all([answered, heard])
    expect(event.atMs - atMs).toBeLessThan(1000)
    expect(event.text).toContain(reading.id)
    expect(answer).toBeDefined()
  })
})

/** The first event of a kind on a stream, and when it came. */
async function hear(stream: Response, kind: string): Promise<{ text: string; atMs: number }> {
  let text = ''
  const decoder = new TextDecoder()
  for await (const chunk of stream.body ?? []) {
    text += decoder.decode(chunk as Uint8Array, { stream: true })
    const found = text.split('\n\n').find((event) => event.includes(`event: ${kind}\n`))
    if (found !== undefined && text.endsWith('\n\n')) return { text: found, atMs: performance.now() }
  }
  throw new Error(`the stream ended without ${kind}: ${text}`)
}
