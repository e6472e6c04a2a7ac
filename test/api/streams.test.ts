import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { saving, type Service, startService } from './service.ts'

const DAY = '2026-10-17'
const RACE = '/api/v1/races/plateau'

let service: Service
let origin: string
beforeAll(async () => {
  service = await startService()
  origin = await service.app.listen({ port: 0, host: '127.0.0.1' })
  for (const [kind, id] of [
    ['car', 'weaver-2'],
    ['route', 'saltpan-twin-wells'],
    ['sky', 'friday'],
    ['race', 'plateau'],
  ])
    await service.ask(saving(kind, id))
})
afterAll(() => service.close())

const send = (method: 'PUT' | 'POST', url: string, body: object, headers: Record<string, string> = {}) =>
  service.ask({
    method,
    url,
    headers: { 'content-type': 'application/json', ...headers },
    payload: JSON.stringify(body),
  })

async function follow(speedKmh: number): Promise<{ forecastId: string; moved: { movedWh: number }[] }> {
  const url = `${RACE}/days/${DAY}/choice`
  const version = (await service.ask({ url })).json().version as number | undefined
  const ifMatch: Record<string, string> = version === undefined ? {} : { 'if-match': `"${version}"` }
  const choice = { carId: 'weaver-2', skyId: 'friday', speeds: { kind: 'constant', speedKmh } }
  const answer = await send('PUT', url, choice, ifMatch)
  expect(answer.statusCode).toBe(200)
  return answer.json()
}

async function newShare(): Promise<{ id: string; token: string }> {
  const { id, url } = (await send('POST', `${RACE}/days/${DAY}/shares`, { name: 'Escort' })).json()
  return { id, token: String(url).split('#')[1] }
}

let serial = 0
const reading = () => ({
  id: `00000000-0000-4000-8000-${String(++serial).padStart(12, '0')}`,
  tracker: 'nose tracker',
  at: `${DAY}T10:00:00+02:00`,
  inputV: 40,
  inputA: 4,
  outputV: 128,
  outputA: 1.2,
})

interface Told {
  id: string
  event: string
  data: { forecastId?: string; movedWh?: number; verdict?: string }
}

interface Stream {
  /** The next event. */
  next(): Promise<Told>
  /** Resolves when the service has ended the stream. */
  ended(): Promise<void>
  close(): void
}

/** A stream as a browser reads it. */
async function open(path: string, token: string, lastId?: string): Promise<Stream> {
  const gone = new AbortController()
  const headers = { authorization: `Bearer ${token}`, ...(lastId === undefined ? {} : { 'last-event-id': lastId }) }
  const answer = await fetch(`${origin}${path}`, { headers, signal: gone.signal })
  expect(answer.status).toBe(200)
  expect(answer.headers.get('content-type')).toContain('text/event-stream')
  expect(answer.headers.get('content-security-policy')).toContain("default-src 'none'")
  const reader = answer.body?.getReader()
  if (reader === undefined) throw new Error('the stream has no body')
  let text = ''
  const more = async (): Promise<boolean> => {
    const { done, value } = await reader.read()
    text += Buffer.from(value ?? []).toString()
    return !done
  }
  const next = async (): Promise<Told> => {
    for (;;) {
      const found = /^id: (\d+)\nevent: (\w+)\ndata: (.*)\n\n/m.exec(text)
      if (found !== null) {
        text = text.slice(found.index + found[0].length)
        return { id: found[1], event: found[2], data: JSON.parse(found[3]) }
      }
      if (!(await more())) throw new Error(`the stream ended: ${text}`)
    }
  }
  const ended = async (): Promise<void> => {
    while (await more());
  }
  return { next, ended, close: () => gone.abort() }
}

describe('a day that is watched', () => {
  test('tells of a choice, of its forecast, of a reading and of what that moved', async () => {
    const stream = await open(`${RACE}/days/${DAY}/events`, service.token)
    const { forecastId } = await follow(60)
    expect(await stream.next()).toMatchObject({ event: 'choice' })
    expect(await stream.next()).toMatchObject({ event: 'forecast', data: { forecastId, movedWh: null } })
    const { moved, verdict } = (await send('POST', `${RACE}/readings`, reading())).json()
    expect(await stream.next()).toMatchObject({ event: 'reading', data: { verdict, tracker: 'nose tracker' } })
    const { event, data } = await stream.next()
    expect(event).toBe('forecast')
    expect(data.movedWh).toBe(moved[0].movedWh)
    expect(Math.abs(moved[0].movedWh)).toBeGreaterThan(0.5)
    stream.close()
  })

  test('tells whoever comes back what happened since', async () => {
    const stream = await open(`${RACE}/days/${DAY}/events`, service.token)
    await follow(61)
    const { id } = await stream.next()
    stream.close()
    await follow(62)
    const again = await open(`${RACE}/days/${DAY}/events`, service.token, id)
    const events = []
    for (let n = 0; n < 3; n++) events.push((await again.next()).event)
    expect(events).toEqual(['forecast', 'choice', 'forecast'])
    again.close()
  })
})

describe('a share link', () => {
  test('opens the day’s budget and follows it, but tells of no reading', async () => {
    const { token } = await newShare()
    const stream = await open('/api/v1/share/events', token)
    const { moved } = (await send('POST', `${RACE}/readings`, reading())).json()
    const { event, data } = await stream.next()
    expect([event, data.movedWh]).toEqual(['forecast', moved[0].movedWh])
    const headers = { authorization: `Bearer ${token}` }
    const shown = (await service.ask({ url: '/api/v1/share/budget', headers })).json()
    expect(shown).toMatchObject({ name: 'Escort', date: DAY, learned: true })
    const followed = (await service.ask({ url: `${RACE}/days/${DAY}/budget` })).json()
    expect(shown.budget).toEqual(followed.budget)
    expect(shown.budget.days[0].closing.wh).toBe(moved[0].closingWhAfter)
    expect(shown.madeAt).toBe(followed.madeAt)
    stream.close()
  })

  test('revoked ends its open streams and opens none', async () => {
    const { id, token } = await newShare()
    const other = await newShare()
    const stream = await open('/api/v1/share/events', token)
    const kept = await open('/api/v1/share/events', other.token)
    await service.ask({ method: 'DELETE', url: `${RACE}/days/${DAY}/shares/${id}` })
    await stream.ended()
    const refused = await fetch(`${origin}/api/v1/share/events`, { headers: { authorization: `Bearer ${token}` } })
    expect(await refused.json()).toMatchObject({ status: 401, code: 'link-revoked' })
    await follow(63)
    expect((await kept.next()).event).toBe('forecast')
    kept.close()
  })

  test('is no business of the owner, who is told where to look', async () => {
    expect((await service.ask({ url: '/api/v1/share/budget' })).json()).toMatchObject({ code: 'no-such-share' })
    expect((await service.ask({ url: '/api/v1/share/events' })).json()).toMatchObject({ code: 'no-such-share' })
  })
})

describe('a choice', () => {
  test('replaces the one that was read, and no other', async () => {
    await follow(64)
    const choice = { carId: 'weaver-2', skyId: 'friday', speeds: { kind: 'constant', speedKmh: 65 } }
    const url = `${RACE}/days/${DAY}/choice`
    expect((await send('PUT', url, choice)).json()).toMatchObject({ status: 428, code: 'precondition-required' })
    const stale = await send('PUT', url, choice, { 'if-match': '"1"' })
    expect(stale.json()).toMatchObject({ status: 412, code: 'version-changed', errors: [{ field: 'If-Match' }] })
    const lost = await send('PUT', url, { ...choice, carId: 'nobody' }, { 'if-match': '*' })
    expect(lost.json()).toMatchObject({ status: 422, code: 'missing-document', errors: [{ field: 'carId' }] })
    expect((await service.ask({ url })).json()).toMatchObject({ speeds: { speedKmh: 64 } })
  })

  test('is made for a day of the race', async () => {
    const choice = { carId: 'weaver-2', skyId: 'friday', speeds: { kind: 'constant', speedKmh: 65 } }
    const problem = (await send('PUT', `${RACE}/days/2026-10-19/choice`, choice)).json()
    expect(problem).toMatchObject({ status: 404, code: 'no-such-day' })
  })
})

test('a service that stops ends its streams', async () => {
  const other = await service.another({})
  const address = await other.listen({ port: 0, host: '127.0.0.1' })
  const headers = { authorization: `Bearer ${service.token}` }
  const answer = await fetch(`${address}${RACE}/days/${DAY}/events`, { headers })
  const closed = other.close()
  const text = await answer.text()
  expect(text).toContain('retry: ')
  await closed
})
