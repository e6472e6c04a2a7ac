import type { Request } from '../api/service.ts'
import { type Attempt, COLLECTIONS, type Kind } from './attempt.ts'
import { DOCUMENTS, GPX, ROUTE_TABLES, SKY_TABLES, WHOLE } from './bases.ts'
import type { Chance } from './chance.ts'
import { type Door, standingId } from './document-doors.ts'
import { laneRace } from './forecast-doors.ts'
import {
  ODD_IDS,
  ODD_OPTIONS,
  ODD_QUERIES,
  ODD_SKY_OPTIONS,
  ODD_TAGS,
  ODD_TYPES,
  ODD_VERSIONS,
} from './odd-addresses.ts'

const KINDS: Kind[] = ['car', 'route', 'race', 'sky']

const attempt = (request: Request, what: string, rest: Partial<Attempt> = {}): Attempt => ({
  request,
  what,
  isOneOff: true,
  isWrong: true,
  names: null,
  touches: null,
  yields: null,
  ...rest,
})

const document = (kind: Kind): string => JSON.stringify(DOCUMENTS[kind][0])

function oddIfMatch(by: Chance, i: number, door: string): Attempt {
  const kind = KINDS[i % KINDS.length]
  const id = standingId(door, i)
  const tag = by.pick(ODD_TAGS)
  const url = `/api/v1/${COLLECTIONS[kind]}/${id}`
  const isPut = door.startsWith('PUT')
  const headers = { 'if-match': tag, ...(isPut ? { 'content-type': 'application/json' } : {}) }
  const request: Request = isPut
    ? { method: 'PUT', url, headers, payload: document(kind) }
    : { method: 'DELETE', url, headers: by.isLucky(0.1) ? {} : headers }
  return attempt(request, `If-Match ${tag}`, { names: 'If-Match', touches: { kind, id } })
}

/** A route or sky file as it should be, but for one parameter of its address. */
function oddOptions(by: Chance, i: number, door: string): Attempt {
  const isSky = by.isLucky(0.5)
  const kind = isSky ? 'sky' : 'route'
  const file = isSky ? SKY_TABLES[0] : { ...by.pick([ROUTE_TABLES[0], { text: GPX }]), query: '' }
  const odd = by.pick(isSky ? [...ODD_OPTIONS, ...ODD_SKY_OPTIONS] : ODD_OPTIONS)
  const [name] = odd.split('=')
  const kept = file.query
    .split('&')
    .filter((one) => one !== '' && one.split('=')[0] !== name && !(odd.includes('"name"') && one.startsWith('name=')))
  const id = standingId(door, i)
  const collection = COLLECTIONS[kind]
  const isRead = by.isLucky(0.5)
  const url = `/api/v1/${collection}/${isRead ? 'read' : id}?${[...kept, encodeURI(decodeURI(odd))].join('&')}`
  const headers = { 'content-type': file.text === GPX ? 'application/gpx+xml' : 'text/csv' }
  const request: Request = { method: isRead ? 'POST' : 'PUT', url, headers, payload: file.text }
  return attempt(request, odd, { isWrong: !odd.includes('"units"'), touches: isRead ? null : { kind, id } })
}

/** A body as it should be under a name that it does not have, or with headers that do not hold. */
function oddHeaders(by: Chance, i: number, door: string): Attempt {
  const kind = by.pick(KINDS)
  const id = standingId(door, i)
  const [method, url, payload] = by.pick<[Request['method'], string, string]>([
    ['PUT', `/api/v1/${COLLECTIONS[kind]}/${id}`, document(kind)],
    ['POST', '/api/v1/routes/read', document('route')],
    ['POST', '/api/v1/skies/read', document('sky')],
    ['POST', '/api/v1/forecast', JSON.stringify(WHOLE)],
    ['POST', `/api/v1/races/${laneRace(i)}/forecasts`, '{}'],
  ])
  const type = by.pick(ODD_TYPES)
  const json = { 'content-type': 'application/json' }
  const headers = by.pick<Record<string, string>>([
    { 'content-type': type },
    { 'content-type': type },
    { ...json, 'content-encoding': by.pick(['gzip', 'br', 'deflate', 'zstd', 'x-unknown', 'identity, gzip']) },
    { ...json, host: 'elsewhere.example' },
    { ...json, origin: by.pick(['https://elsewhere.example', 'null', 'x', 'file://']) },
    { ...json, 'if-none-match': by.pick(['"x"', '1', '""', 'W/', '"1", x']) },
  ])
  const isHarmless = 'content-encoding' in headers || ('if-none-match' in headers && method === 'POST')
  const touches = method === 'PUT' ? { kind, id } : null
  return attempt({ method, url, headers, payload }, JSON.stringify(headers), { isWrong: !isHarmless, touches })
}

/** An address that exists but for one part. */
function oddAddress(by: Chance, i: number): Attempt {
  const id = by.pick(ODD_IDS)
  const collection = COLLECTIONS[by.pick(KINDS)]
  const version = by.pick(ODD_VERSIONS)
  const query = by.pick(ODD_QUERIES)
  const day = by.pick(['2026-02-30', '17.10.2026', '2026-10-18', '%00', 'today', '2026-10-17T00:00:00Z'])
  const [url, names] = by.pick<[string, string | null]>([
    [`/api/v1/${collection}/${id}`, null],
    [`/api/v1/${collection}/${id}/versions`, null],
    [`/api/v1/cars/fuzz-car?version=${version}`, null],
    [`/api/v1/cars/fuzz-car?version=${version}`, null],
    [`/api/v1/cars/fuzz-car?${query}`, null],
    [`/api/v1/${collection}?${query}`, null],
    [`/api/v1/races/${id}/days`, null],
    [`/api/v1/races/${laneRace(i)}/days/${day}`, null],
    [`/api/v1/races/${laneRace(i)}/days/${day}/stages`, null],
    [`/api/v1/races/${laneRace(i)}/days?${query}`, null],
    [`/api/v1/races/${id}/forecasts`, null],
    [`/api/v1/forecasts/${id}`, null],
    [`/api/v1/forecasts/01234567-89ab-8def-8123-456789abcde${by.pick(['g', '', '00', 'f', 'F'])}`, null],
    [`/api/v1/examples/${by.pick([id, 'constructor', 'toString'])}`, null],
    [`/api/v1/examples?${query}`, null],
  ])
  const isEmpty = url.endsWith('?&&x') || url.endsWith('?=')
  return attempt({ method: by.isLucky(0.1) ? 'HEAD' : 'GET', url }, url.slice(0, 80), { names, isWrong: !isEmpty })
}

/** A method on an id that cannot be, or that an address does not know. */
function oddTarget(by: Chance, i: number): Attempt {
  const kind = KINDS[i % KINDS.length]
  const id = by.pick(ODD_IDS)
  const json = { 'content-type': 'application/json' }
  const request = by.pick<Request>([
    { method: 'PUT', url: `/api/v1/${COLLECTIONS[kind]}/${id}`, headers: json, payload: document(kind) },
    { method: 'DELETE', url: `/api/v1/${COLLECTIONS[kind]}/${id}`, headers: { 'if-match': '"1"' } },
    {
      method: 'DELETE',
      url: `/api/v1/${COLLECTIONS[kind]}/${standingId('nobody', i)}`,
      headers: { 'if-match': '"1"' },
    },
    { method: 'DELETE', url: `/api/v1/cars/fuzz-car?${by.pick(ODD_QUERIES)}`, headers: { 'if-match': '"9"' } },
    { method: 'POST', url: `/api/v1/races/${id}/forecasts`, headers: json, payload: '{"carId":"fuzz-car"}' },
    { method: 'POST', url: `/api/v1/${COLLECTIONS[kind]}/fuzz-${kind}`, headers: json, payload: document(kind) },
    { method: 'DELETE', url: '/api/v1/forecasts/01234567-89ab-8def-8123-456789abcdef' },
    { method: 'PATCH', url: `/api/v1/cars/fuzz-car`, headers: json, payload: '{}' },
    { method: 'PUT', url: '/api/v1/forecast', headers: json, payload: '{}' },
  ])
  return attempt(request, `${request.method} ${request.url.slice(0, 80)}`)
}

const door = (name: string, count: number, make: (by: Chance, i: number, door: string) => Attempt): Door => ({
  name,
  count,
  takesDocuments: false,
  attempt: (by, i) => make(by, i, name),
})

/** Sound documents at odd addresses and under odd headers, and addresses that are only read. */
export const ADDRESS_DOORS: Door[] = [
  door('PUT with odd If-Match', 100, oddIfMatch),
  door('DELETE with odd If-Match', 120, oddIfMatch),
  door('files with odd options', 160, oddOptions),
  door('bodies with odd headers', 140, oddHeaders),
  door('changes at odd addresses', 120, oddTarget),
  door('GET at odd addresses', 200, oddAddress),
]
