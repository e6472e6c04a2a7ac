import { setTimeout as later } from 'node:timers/promises'
import type { LightMyRequestResponse } from 'fastify'
import type { Service } from '../api/service.ts'
import { type Attempt, typed } from './attempt.ts'
import { DOCUMENTS, WHOLE } from './bases.ts'
import { chance } from './chance.ts'
import { type Door, replaces, standingId } from './document-doors.ts'
import { LANES } from './forecast-doors.ts'
import { shrunk } from './shrink.ts'
import { storeState } from './store-state.ts'
import { budgetComplaint, complaint } from './verdict.ts'

/** An answer that takes longer hangs. [ms] */
const HANG_MS = 30_000
/** Of many failures at one door the first are shown with their requests. */
const MOST_SHRUNK = 4

export interface Tally {
  door: string
  attempts: number
  oneOff: number
  refused: number
  accepted: number
  /** Forecasts made with documents that were accepted after all. */
  forecasts: number
  slowestMs: number
  failures: string[]
}

/** Tries a door with as many attempts as it counts; the same seed tries the same. */
export async function assault(service: Service, door: Door, seed: string): Promise<Tally> {
  const tally: Tally = {
    door: door.name,
    attempts: 0,
    oneOff: 0,
    refused: 0,
    accepted: 0,
    forecasts: 0,
    slowestMs: 0,
    failures: [],
  }
  await stand(service, door)
  const before = new Set(await storeState(service))
  const saved = new Set<string>()
  let shown = 0
  const lane = async (first: number): Promise<void> => {
    for (let i = first; i < door.count; i += LANES) {
      const attempt = door.attempt(chance(`${seed} ${door.name} ${i}`), i)
      const failure = await tried(service, attempt, tally, saved)
      if (failure === null) continue
      const where = `seed ${seed}, ${door.name} ${i}`
      const isFirst = ++shown <= MOST_SHRUNK
      tally.failures.push(isFirst ? await told(service, failure, where) : `${where}: ${failure.text}`)
    }
  }
  await Promise.all(Array.from({ length: LANES }, (_, i) => lane(i)))
  const after = await storeState(service)
  const lost = [...before].filter((line) => !after.includes(line) && !isReplaced(line, saved))
  const gained = after.filter((line) => !before.has(line) && !isExplained(line, saved))
  for (const line of [...lost, ...gained]) tally.failures.push(`${door.name}: the store changed unasked: ${line}`)
  return tally
}

/** Documents for the attempts that would replace or remove one. */
async function stand({ store }: Service, door: Door): Promise<void> {
  const made: Promise<unknown>[] = []
  for (let i = 0; i < door.count; i++) {
    const { touches, request } = door.attempt(chance('stand'), i)
    if (touches === null || touches.kind === 'forecast' || touches.id !== standingId(door.name, i)) continue
    const isDelete = request.method === 'DELETE'
    if (!isDelete && !(door.name.includes('If-Match') || (door.takesDocuments && replaces(i)))) continue
    made.push(store.documents.create(touches.kind, touches.id, 'before', DOCUMENTS[touches.kind][0]))
  }
  await Promise.all(made)
}

const isReplaced = (line: string, saved: Set<string>): boolean =>
  line.includes(' holds ') && saved.has(line.split(' ')[0])
const isExplained = (line: string, saved: Set<string>): boolean => saved.has(line.split(' ')[0])

interface Failure {
  attempt: Attempt
  text: string
}

/** Sends one attempt; what is wrong with its answer, or null. */
async function tried(service: Service, attempt: Attempt, tally: Tally, saved: Set<string>): Promise<Failure | null> {
  const { touches } = attempt
  const before = touches === null ? [] : await storeState(service, touches)
  const from = performance.now()
  const answer = await asked(service, attempt)
  tally.slowestMs = Math.max(tally.slowestMs, performance.now() - from)
  tally.attempts++
  if (attempt.isOneOff) tally.oneOff++
  const text = typeof answer === 'string' ? answer : complaint(attempt, answer)
  if (typeof answer === 'string' || text !== null) return { attempt, text: String(text) }
  if (answer.statusCode >= 400) {
    tally.refused++
    if (touches === null) return null
    const after = await storeState(service, touches)
    if (after.join() === before.join()) return null
    return { attempt, text: `refused, but the store went from ${before.join()} to ${after.join()}` }
  }
  tally.accepted++
  if (touches !== null) saved.add(`${touches.kind}/${touches.id}`)
  return soundness(service, attempt, answer, tally)
}

async function asked(service: Service, { request }: Attempt): Promise<LightMyRequestResponse | string> {
  const stop = new AbortController()
  const hangs = later(HANG_MS, `no answer in ${HANG_MS / 1000} s`, { signal: stop.signal }).catch(() => 'stopped')
  const answer = await Promise.race([
    service.ask(request).catch((error: unknown) => `not as described: ${String(error).slice(0, 600)}`),
    hangs,
  ])
  stop.abort()
  return answer
}

/** A document that was accepted must give a forecast with a ledger that closes, or be refused there by its field. */
async function soundness(
  service: Service,
  { yields, request }: Attempt,
  answer: LightMyRequestResponse,
  tally: Tally,
): Promise<Failure | null> {
  if (yields === null || yields === 'budget' || yields === 'tracker-days' || yields === 'pointing') return null
  const address = { url: String(request.url).split('?')[0] }
  const { document } = request.method === 'PUT' ? (await service.ask(address)).json() : answer.json()
  const body = yields === 'route' ? { ...WHOLE, routes: { road: document } } : { ...WHOLE, [yields]: document }
  const follow = forecasting(body)
  const forecast = await asked(service, follow)
  tally.forecasts++
  const text = typeof forecast === 'string' ? forecast : complaint(follow, forecast)
  return text === null ? null : { attempt: follow, text }
}

const forecasting = (body: object): Attempt => ({
  what: 'a forecast with what was accepted',
  isOneOff: false,
  isWrong: false,
  names: null,
  touches: null,
  yields: 'budget' as const,
  request: {
    method: 'POST',
    url: '/api/v1/forecast',
    headers: { 'content-type': 'application/json' },
    payload: JSON.stringify(body),
  },
})

/** A failure in words: where, what, and the smallest request that shows it. */
async function told(service: Service, { attempt, text }: Failure, where: string): Promise<string> {
  const { payload } = attempt.request
  const isBody = typeof payload === 'string' || Buffer.isBuffer(payload)
  const smallest = isBody
    ? await shrunk(payload, async (smaller) => {
        const request = { ...attempt.request, payload: smaller }
        const answer = await asked(service, { ...attempt, request })
        return (typeof answer === 'string' ? answer : complaint(attempt, answer)) === text
      })
    : payload
  return `${where}: ${attempt.what.slice(0, 200)}: ${text}\n    ${typed({ ...attempt.request, payload: smallest }).slice(0, 3000)}`
}

/** Sends a sound document or file; what is wrong with the answer, or null. */
export async function soundComplaint(service: Service, attempt: Attempt): Promise<string | null> {
  const answer = await asked(service, attempt)
  if (typeof answer === 'string') return answer
  if (answer.statusCode >= 300) return `${attempt.what} is refused: ${answer.body.slice(0, 400)}`
  return attempt.yields === 'budget' ? budgetComplaint(answer.json()) : complaint(attempt, answer)
}
