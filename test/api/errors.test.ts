import { once } from 'node:events'
import { connect, createServer, type Server } from 'node:net'
import { setTimeout as later } from 'node:timers/promises'
import Fastify from 'fastify'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import type { Api } from '../../server/api/api.ts'
import { answerClientError, answerFaults } from '../../server/api/faults.ts'
import { ERRORS } from '../../server/errors.ts'
import { saving, type Service, startService } from './service.ts'

let service: Service
beforeAll(async () => {
  service = await startService()
})
afterAll(() => service.close())

function portOf(server: Server): number {
  const address = server.address()
  if (address === null || typeof address === 'string') throw new Error('the server does not listen')
  return address.port
}

/** What every error answer must be (RFC 9457, section 3.1). */
function expectProblem(answer: { statusCode: number; headers: object; body: string }, code: keyof typeof ERRORS): void {
  const { status, title } = ERRORS[code]
  expect(JSON.parse(answer.body)).toMatchObject({ type: `urn:stagewatt:problem:${code}`, title, status, code })
  expect(answer.statusCode).toBe(status)
  expect(answer.headers).toMatchObject({ 'content-type': 'application/problem+json; charset=utf-8' })
}

describe('an address', () => {
  test('that does not exist is told apart from a wrong method', async () => {
    expectProblem(await service.app.inject('/api/v1/nope'), 'not-found')
    expectProblem(await service.app.inject('/nope'), 'not-found')
    const wrong = await service.app.inject({ method: 'POST', url: '/api/v1/cars/weaver-2?x=1' })
    expectProblem(wrong, 'method-not-allowed')
    expect(wrong.headers.allow).toBe('GET, HEAD, PUT, DELETE')
    expectProblem(await service.app.inject({ method: 'DELETE', url: '/api/health' }), 'method-not-allowed')
  })

  test('that is malformed is refused', async () => {
    expectProblem(await service.app.inject('/api/v1/cars/%zz'), 'bad-address')
    expectProblem(await service.app.inject(`/api/v1/cars/${'a'.repeat(200)}`), 'bad-id')
  })

  test('of an example that does not exist names those that do', async () => {
    const answer = await service.ask({ url: '/api/v1/examples/boat' })
    expectProblem(answer, 'no-such-example')
    expect(answer.json().detail).toContain('car')
  })
})

describe('a fault of the service', () => {
  test('that nobody foresaw is logged once and tells its cause to nobody', async () => {
    const lines: string[] = []
    const stream = { write: (line: string) => lines.push(line) }
    const app: Api = Fastify({ logger: { level: 'warn', stream } })
    answerFaults(app)
    app.get('/bug', async () => {
      throw new TypeError('secret detail')
    })
    const answer = await app.inject('/bug')
    expectProblem(answer, 'internal')
    expect(answer.body).not.toContain('secret')
    expect(lines.filter((line) => line.includes('secret detail'))).toHaveLength(1)
    await app.close()
  })

  test('is told as overload while the event loop is held up, and passes; health is answered all the same', async () => {
    const app = await service.another({ mostDelayMs: 100 })
    const until = performance.now() + 10_000
    let answer = await app.inject('/api/v1/cars')
    while (answer.statusCode !== 503 && performance.now() < until) {
      const blocked = performance.now() + 400
      while (performance.now() < blocked);
      await later(1)
      answer = await app.inject('/api/v1/cars')
    }
    expectProblem(answer, 'overloaded')
    expect(answer.headers['retry-after']).toBe('5')
    expect((await app.inject('/api/health')).statusCode).toBe(200)
  })

  test('is told as stopping to those who come too late', async () => {
    const app = await service.another({})
    await app.listen({ port: 0, host: '127.0.0.1' })
    const socket = connect(portOf(app.server), '127.0.0.1')
    await once(socket, 'connect')
    socket.write('GET /api/ready HTTP/1.1\r\nHost: 127.0.0.1\r\n')
    await later(50)
    const closed = app.close()
    await later(50)
    socket.write('\r\n')
    const [chunk] = await once(socket, 'data')
    expect(String(chunk)).toContain('503')
    expect(String(chunk)).toContain('"code":"stopping"')
    socket.destroy()
    await closed
  })

  test('of the database is told as unavailable, and the service is not ready', async () => {
    const other = await startService()
    expect((await other.ask({ url: '/api/ready' })).json()).toEqual({ status: 'ready' })
    await other.database.close()
    expectProblem(await other.ask({ url: '/api/ready' }), 'store-unavailable')
    expectProblem(await other.ask({ url: '/api/v1/cars' }), 'store-unavailable')
    expectProblem(await other.ask(saving('car', 'weaver-2')), 'store-unavailable')
    expect((await other.ask({ url: '/api/health' })).json()).toEqual({ status: 'ok', version: '0.0.0-test' })
    await other.close()
  })

  test('of the workers is told: no worker is not ready, too long is said', async () => {
    const other = await startService({ timeLimitMs: 1 })
    expectProblem(await other.ask(saving('car', 'weaver-2')), 'took-too-long')
    await other.compute.close()
    expectProblem(await other.ask({ url: '/api/ready' }), 'busy')
    expectProblem(await other.ask(saving('car', 'weaver-2')), 'stopping')
    await other.close()
  })
})

describe('what is no request', () => {
  /** The answer on the wire to a connection that ends in this error. */
  async function wireAnswer(code: string): Promise<string> {
    const server = createServer((socket) => answerClientError(Object.assign(new Error(code), { code }), socket))
    server.listen(0, '127.0.0.1')
    await once(server, 'listening')
    const client = connect(portOf(server), '127.0.0.1')
    const chunks: Buffer[] = []
    client.on('data', (chunk) => chunks.push(chunk))
    await once(client, 'close')
    server.close()
    return Buffer.concat(chunks).toString()
  }

  test.each([
    ['ERR_HTTP_REQUEST_TIMEOUT', 'request-timeout'],
    ['HPE_HEADER_OVERFLOW', 'headers-too-large'],
    ['HPE_INVALID_METHOD', 'bad-request'],
  ] as const)('%s is answered as %s', async (error, code) => {
    const [head, body] = (await wireAnswer(error)).split('\r\n\r\n')
    expect(head).toMatch(new RegExp(`^HTTP/1.1 ${ERRORS[code].status} `))
    expect(head).toContain('Content-Type: application/problem+json')
    expect(JSON.parse(body)).toMatchObject({ code, status: ERRORS[code].status })
  })

  test('is answered so by the service itself', async () => {
    const app = await service.another({})
    await app.listen({ port: 0, host: '127.0.0.1' })
    const socket = connect(portOf(app.server), '127.0.0.1')
    socket.end('NONSENSE\r\n\r\n')
    const [chunk] = await once(socket, 'data')
    expect(String(chunk)).toContain('"code":"bad-request"')
  })
})

test('every error has a status of its class and a title of its own', () => {
  const entries = Object.entries(ERRORS)
  expect(entries.length).toBeGreaterThan(30)
  expect(new Set(entries.map(([, { title }]) => title)).size).toBe(entries.length)
  for (const [, { status }] of entries) expect(status >= 400 && status < 600).toBe(true)
})
