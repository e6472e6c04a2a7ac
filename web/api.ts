import type { BudgetDocument } from '../server/documents/budget.ts'
import type { Problem } from '../server/documents/problem.ts'
import type { StageDocument } from '../server/documents/race.ts'
import type { SpeedsInput } from '../server/documents/speeds.ts'

export type Kind = 'cars' | 'races' | 'skies' | 'routes'

export interface Item {
  id: string
  name: string
  version: number
  savedAt: string
}

/** Why a request gave no answer, in words for people and a code for decisions. */
export interface Refusal {
  status: number
  code: string
  title: string
  detail: string
  errors: Problem[]
}

export type Answer<T> = { value: T; refusal?: undefined } | { value?: undefined; refusal: Refusal }

export interface DayItem {
  date: string
  zone: string
  driving: { from: string; to: string }
  stages: (Pick<StageDocument, 'id' | 'name' | 'start' | 'finish' | 'route' | 'fromKm'> & { toKm?: number })[]
}

/** Something that the reader of a file did on its own. */
export interface Notice {
  detail: string
  line?: number
  column?: number
}

/** What became of a file: the document in it with what was noticed on the way. */
export interface ReadFile {
  document: Record<string, unknown> & { name: string }
  notices: Notice[]
  summary?: Record<string, unknown>
}

export interface Saved extends Item {
  notices?: Notice[]
}

export interface ForecastRequest {
  race: { id: string }
  car: { id: string }
  sky: { id: string }
  speeds: SpeedsInput
  date: string
}

const BASE = '/api/v1'
const NO_CONTACT: Refusal = {
  status: 0,
  code: 'no-contact',
  title: 'No contact with the service',
  detail: 'The service did not answer.',
  errors: [],
}

/** Called after every exchange: whether the service answered at all. */
export const contact = { heard: (_isHeard: boolean): void => {} }

async function ask<T>(path: string, init?: RequestInit): Promise<Answer<T>> {
  let response: Response
  try {
    response = await fetch(path, init)
  } catch (error) {
    if (init?.signal?.aborted === true) return { refusal: { ...NO_CONTACT, code: 'given-up' } }
    contact.heard(false)
    return { refusal: { ...NO_CONTACT, detail: error instanceof Error ? error.message : NO_CONTACT.detail } }
  }
  contact.heard(true)
  const text = await response.text().catch(() => '')
  const body = parsed(text)
  if (response.ok) return { value: body as T }
  return { refusal: refusalOf(response, body) }
}

function parsed(text: string): unknown {
  try {
    return text === '' ? null : JSON.parse(text)
  } catch {
    return null
  }
}

function refusalOf(response: Response, body: unknown): Refusal {
  const told = (body ?? {}) as Partial<Refusal>
  return {
    status: response.status,
    code: told.code ?? `status-${response.status}`,
    title: told.title ?? 'The service refused this',
    detail: told.detail ?? `It answered ${response.status} ${response.statusText}.`,
    errors: Array.isArray(told.errors) ? told.errors : [],
  }
}

const json = (body: unknown, headers: Record<string, string> = {}): RequestInit => ({
  headers: { 'content-type': 'application/json', ...headers },
  body: JSON.stringify(body),
})

export const listOf = async (kind: Kind): Promise<Answer<Item[]>> => itemsOf(`${BASE}/${kind}`)

export const daysOf = async (raceId: string): Promise<Answer<DayItem[]>> => itemsOf(`${BASE}/races/${raceId}/days`)

async function itemsOf<T>(path: string): Promise<Answer<T[]>> {
  const answer = await ask<{ items: T[] }>(path)
  return answer.value === undefined ? answer : { value: answer.value.items }
}

export const documentOf = (kind: Kind, id: string): Promise<Answer<Item & { document: Record<string, unknown> }>> =>
  ask(`${BASE}/${kind}/${id}`)

export const budgetOf = (request: ForecastRequest, signal: AbortSignal): Promise<Answer<BudgetDocument>> =>
  ask(`${BASE}/forecast`, { method: 'POST', signal, ...json(request) })

export const exampleOf = (kind: string): Promise<Answer<unknown>> => ask(`${BASE}/examples/${kind}`)

/** Saves a document: as a new one without a version, over that version with one. */
export const save = (kind: Kind, id: string, document: unknown, version: number | null): Promise<Answer<Saved>> =>
  ask(`${BASE}/${kind}/${id}`, {
    method: 'PUT',
    ...json(document, version === null ? {} : { 'if-match': `"${version}"` }),
  })

export const remove = (kind: Kind, item: Item): Promise<Answer<null>> =>
  ask(`${BASE}/${kind}/${item.id}`, { method: 'DELETE', headers: { 'if-match': `"${item.version}"` } })

/** Reads a file without storing anything: its document, or every problem with line and column. */
export const readFile = (
  kind: 'routes' | 'skies',
  file: Blob,
  type: string,
  options: Record<string, string> = {},
): Promise<Answer<ReadFile>> =>
  ask(`${BASE}/${kind}/read?${new URLSearchParams(options)}`, {
    method: 'POST',
    headers: { 'content-type': type },
    body: file,
  })

export const isServiceUp = (): Promise<Answer<unknown>> => ask('/api/health', { cache: 'no-store' })
