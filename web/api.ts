import type { BudgetDocument } from '../server/documents/budget.ts'
import type { CoastDownDocument } from '../server/documents/coast-down-result.ts'
import type { Problem } from '../server/documents/problem.ts'
import type { StageDocument } from '../server/documents/race.ts'
import type { RouteDocument } from '../server/documents/route.ts'
import type { SkyComparison } from '../server/documents/sky-comparison.ts'
import type { SkyDocument } from '../server/documents/sky.ts'
import type { SpeedsInput } from '../server/documents/speeds.ts'
import type { RouteSummary } from '../server/files/route-reading.ts'
import type { ClimateOptions } from '../server/files/climate-options.ts'
import type { SkyTableOptions } from '../server/files/sky-table.ts'

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
export interface ReadFile<D, S> {
  document: D
  notices: Notice[]
  summary?: S
}

export type ReadRoute = ReadFile<RouteDocument, RouteSummary>
export type ReadSky = ReadFile<SkyDocument, unknown>

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

export const BASE = '/api/v1'
const NO_CONTACT: Refusal = {
  status: 0,
  code: 'no-contact',
  title: 'No contact with the service',
  detail: 'The service did not answer.',
  errors: [],
}

/** Called after every exchange: whether the service answered at all, and that it did not know who asked. */
export const contact = { heard: (_isHeard: boolean): void => {}, unknown: (): void => {} }

type Exchange = { response: Response; refusal?: undefined } | { response?: undefined; refusal: Refusal }

async function exchange(path: string, init?: RequestInit): Promise<Exchange> {
  try {
    const response = await fetch(path, init)
    contact.heard(true)
    if (response.status === 401) contact.unknown()
    return response.ok ? { response } : { refusal: await refusalOf(response) }
  } catch (error) {
    return { refusal: lost(error, init) }
  }
}

function lost(error: unknown, init?: RequestInit): Refusal {
  if (init?.signal?.aborted === true) return { ...NO_CONTACT, code: 'given-up' }
  contact.heard(false)
  return { ...NO_CONTACT, detail: error instanceof Error ? error.message : NO_CONTACT.detail }
}

/** Asks for something that comes as JSON. */
export async function ask<T extends object>(path: string, init?: RequestInit): Promise<Answer<T>> {
  const got = await exchange(path, init)
  if (got.response === undefined) return got
  try {
    const value: T = await got.response.json()
    return { value }
  } catch (error) {
    return { refusal: lost(error, init) }
  }
}

/** Asks for something to be done that has no answer of its own. */
export async function tell(path: string, init: RequestInit): Promise<Answer<true>> {
  const got = await exchange(path, init)
  return got.response === undefined ? got : { value: true }
}

async function refusalOf(response: Response): Promise<Refusal> {
  const plain = {
    status: response.status,
    code: `status-${response.status}`,
    title: 'The service refused this',
    detail: `It answered ${response.status} ${response.statusText}.`,
    errors: [],
  }
  const told: Partial<Refusal> | null = await response.json().catch(() => null)
  return { ...plain, ...told, errors: told?.errors ?? [] }
}

export const json = (body: unknown, headers: Record<string, string> = {}): RequestInit => ({
  headers: { 'content-type': 'application/json', ...headers },
  body: JSON.stringify(body),
})

export const listOf = async (kind: Kind): Promise<Answer<Item[]>> => itemsOf(`${BASE}/${kind}`)

export const daysOf = async (raceId: string): Promise<Answer<DayItem[]>> => itemsOf(`${BASE}/races/${raceId}/days`)

export async function itemsOf<T>(path: string): Promise<Answer<T[]>> {
  const answer = await ask<{ items: T[] }>(path)
  return answer.value === undefined ? answer : { value: answer.value.items }
}

export const documentOf = (kind: Kind, id: string): Promise<Answer<Item & { document: object }>> =>
  ask(`${BASE}/${kind}/${id}`)

export const budgetOf = (request: ForecastRequest, signal: AbortSignal): Promise<Answer<BudgetDocument>> =>
  ask(`${BASE}/forecast`, { method: 'POST', signal, ...json(request) })

export const exampleOf = (kind: string): Promise<Answer<object>> => ask(`${BASE}/examples/${kind}`)

/** Saves a document: as a new one without a version, over that version with one. */
export const save = (kind: Kind, id: string, document: unknown, version: number | null): Promise<Answer<Saved>> =>
  ask(`${BASE}/${kind}/${id}`, {
    method: 'PUT',
    ...json(document, version === null ? {} : { 'if-match': `"${version}"` }),
  })

export const remove = (kind: Kind, item: Item): Promise<Answer<true>> =>
  tell(`${BASE}/${kind}/${item.id}`, { method: 'DELETE', headers: { 'if-match': `"${item.version}"` } })

/** Reads a file without storing anything: its document, or every problem with line and column. */
const read = <T extends object>(kind: Kind, file: Blob, type: string, query: URLSearchParams): Promise<Answer<T>> =>
  ask(`${BASE}/${kind}/read?${query}`, { method: 'POST', headers: { 'content-type': type }, body: file })

export const readRoute = (file: Blob, type: string): Promise<Answer<ReadRoute>> =>
  read('routes', file, type, new URLSearchParams())

export const readSky = (file: Blob, type: string, options: SkyTableOptions | null): Promise<Answer<ReadSky>> =>
  read('skies', file, type, new URLSearchParams(options === null ? {} : { options: JSON.stringify(options) }))

/** Days of a typical year, out of an EPW or TMY3 file. */
export const readYear = (file: Blob, fileKind: 'epw' | 'tmy3', { name = '', from, to }: ClimateOptions) =>
  read<ReadSky>('skies', file, 'text/csv', new URLSearchParams({ fileKind, name, from, to }))

interface ComparisonRequest {
  forecast: { id: string }
  measured: { id: string }
  day?: Omit<ForecastRequest, 'sky'>
}

/** How far one stored sky was from another. */
export const compareSkies = (request: ComparisonRequest): Promise<Answer<SkyComparison>> =>
  ask(`${BASE}/sky-comparison`, { method: 'POST', ...json(request) })

/** What a coast-down tells, with what its reader did on its own. */
export interface CoastDownAnswer {
  result: CoastDownDocument
  notices: Notice[]
}

/** Rolling and drag from a logged table; nothing is stored. */
export const readCoastDown = (log: Blob, query: URLSearchParams): Promise<Answer<CoastDownAnswer>> =>
  ask(`${BASE}/coast-down?${query}`, { method: 'POST', headers: { 'content-type': 'text/csv' }, body: log })

export const isServiceUp = (): Promise<Answer<true>> => tell('/api/health', { cache: 'no-store' })
