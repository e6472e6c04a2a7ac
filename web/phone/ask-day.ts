import { ask, BASE, json, type Refusal } from '../api.ts'
import { isHeard } from '../state.ts'
import { documentsOf, type Whose } from './fetch-documents.ts'
import { phonePlanner } from './phone-planner.ts'
import type { DayQuestion, Progress, Question, Variant } from './questions.ts'

/** Who worked an answer out. */
export type Source = 'phone' | 'service'

/** An answer with who worked it out and when; for the phone's, how old its documents are. */
export interface DayAnswer<T> {
  value: T
  source: Source
  atMs: number
  /** When the service said last that the phone's documents hold. [ms since 1970, UTC] */
  keptAtMs: number | null
}

/** What became of a question; null: a later one took its place. */
export type Answered<T> = { answer: DayAnswer<T>; refusal?: undefined } | { answer?: undefined; refusal: Refusal }

/** One for plans, one for changes, so that neither waits for the other. */
const planners = { plan: phonePlanner(), 'what-if': phonePlanner() }

export const warmPlanner = (): void => planners['what-if'].warm()

/** The service is waited for so long before the phone begins as well. [ms] */
const PATIENCE_MS = 6000

const NOT_KEPT: Refusal = {
  status: 0,
  code: 'not-on-phone',
  title: 'This race’s documents are not on this phone',
  detail: 'They come along whenever the race is open with contact; open it once with contact before the road.',
  errors: [],
}

const refused = (code: string, title: string, detail: string, errors: Refusal['errors'] = []): Refusal => ({
  status: 422,
  code,
  title,
  detail,
  errors,
})

async function fromPhone<T>(
  whose: Whose,
  question: Question,
  told?: (progress: Progress) => void,
): Promise<Answered<T> | null> {
  const kept = await documentsOf(whose)
  if (kept === null) return { refusal: NOT_KEPT }
  const outcome = await planners[question.kind].ask(kept, question, told)
  if (outcome.kind === 'outdated') return null
  if (outcome.kind === 'failed')
    return { refusal: refused('phone-failed', 'This phone could not work it out', outcome.detail) }
  if (outcome.kind === 'refused')
    return { refusal: refused('cannot-forecast', 'This cannot be worked out', outcome.detail, outcome.errors) }
  const value: T = JSON.parse(outcome.text)
  return { answer: { value, source: 'phone', atMs: Date.now(), keptAtMs: kept.keptAtMs } }
}

async function fromService<T extends object>(
  { race, car, sky }: Whose,
  { kind, asked }: Question,
  signal: AbortSignal,
): Promise<Answered<T>> {
  const names = { race: { id: race }, car: { id: car }, sky: { id: sky } }
  const { value, refusal } = await ask<T>(`${BASE}/${kind}`, {
    method: 'POST',
    signal,
    ...json({ ...names, ...asked }),
  })
  return refusal === undefined
    ? { answer: { value, source: 'service', atMs: Date.now(), keptAtMs: null } }
    : { refusal }
}

/** Whether the service gave no answer that the question itself is to blame for. */
const isSilent = ({ refusal }: Answered<unknown>): boolean =>
  refusal !== undefined && (refusal.status === 0 || refusal.status >= 500)

let asking: AbortController | null = null

/** A plan by whoever answers first: the service, or, where it is silent or slow, this phone. */
export async function planOf<T extends object>(
  whose: Whose,
  asked: DayQuestion,
  told: (progress: Progress) => void,
): Promise<Answered<T> | null> {
  asking?.abort()
  const mine = new AbortController()
  asking = mine
  const own = () => fromPhone<T>(whose, { kind: 'plan', asked }, told)
  const answered = await firstOf(own, () => fromService<T>(whose, { kind: 'plan', asked }, mine.signal))
  if (asking !== mine) return null
  mine.abort()
  return answered
}

async function firstOf<T>(
  own: () => Promise<Answered<T> | null>,
  service: () => Promise<Answered<T>>,
): Promise<Answered<T> | null> {
  if (!isHeard.value) return ownOr(own(), service)
  const served = service()
  const early = await Promise.race([served, pause(PATIENCE_MS)])
  if (early !== null && !isSilent(early)) return early
  const mine = own()
  return Promise.race([ownOr(mine, () => served), served.then((late) => (isSilent(late) ? mine : late))])
}

/** The phone's answer, or the service's where the phone cannot work it out. */
async function ownOr<T>(own: Promise<Answered<T> | null>, service: () => Promise<Answered<T>>) {
  const mine = await own
  if (mine?.refusal === undefined || !['not-on-phone', 'phone-failed'].includes(mine.refusal.code)) return mine
  const served = await service()
  return isSilent(served) ? mine : served
}

const pause = (ms: number): Promise<null> => new Promise((over) => setTimeout(() => over(null), ms))

let changing: AbortController | null = null

/** What a change does: by this phone, which keeps the planned day; by the service where the phone cannot. */
export async function changeOf<T extends object>(
  whose: Whose,
  asked: DayQuestion & { variants: Variant[] },
): Promise<Answered<T> | null> {
  changing?.abort()
  const mine = new AbortController()
  changing = mine
  const question: Question = { kind: 'what-if', asked }
  const answered = await ownOr(fromPhone<T>(whose, question), () => fromService<T>(whose, question, mine.signal))
  return changing === mine || answered?.answer?.source === 'phone' ? answered : null
}
