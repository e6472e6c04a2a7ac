import { type Attempt, COLLECTIONS, type Kind, sent } from './attempt.ts'
import { type WrongBody, wrongCoastDown, wrongDocument, wrongGpx, wrongRouteTable, wrongSkyTable } from './bodies.ts'
import type { Chance } from './chance.ts'

/** A way into the service, and how many attempts are made at it. */
export interface Door {
  name: string
  count: number
  /** Whether its attempts are documents or files; else addresses and headers. */
  takesDocuments: boolean
  attempt(by: Chance, i: number): Attempt
}

/** Documents that exist before a door is tried, so that its attempts would replace or remove them. */
export const standingId = (door: string, i: number): string => `${door.toLowerCase().replaceAll(/[^a-z]+/g, '-')}-${i}`

/** Of every three attempts one would replace a document, two would create one. */
export const replaces = (i: number): boolean => i % 3 === 0

type Body = (by: Chance) => WrongBody & { query?: string; type?: string }

function saving(name: string, kind: Kind, count: number, type: string, body: Body): Door {
  return {
    name,
    count,
    takesDocuments: true,
    attempt(by, i) {
      const { query, ...wrong } = body(by)
      const id = standingId(name, i)
      const url = `/api/v1/${COLLECTIONS[kind]}/${id}${query === undefined ? '' : `?${query}`}`
      const ifMatch = replaces(i) ? '"1"' : undefined
      return sent('PUT', url, wrong.type ?? type, wrong, { touches: { kind, id }, yields: kind, ifMatch })
    },
  }
}

function reading(name: string, kind: 'route' | 'sky', count: number, body: Body): Door {
  return {
    name,
    count,
    takesDocuments: true,
    attempt(by) {
      const { query, type = '', ...wrong } = body(by)
      const url = `/api/v1/${COLLECTIONS[kind]}/read${query === undefined ? '' : `?${query}`}`
      return sent('POST', url, type, wrong, { touches: null, yields: kind })
    },
  }
}

const JSON_TYPE = 'application/json'
const GPX_TYPE = 'application/gpx+xml'
const CSV_TYPE = 'text/csv'

const anyRouteBody: Body = (by) =>
  by.pick([
    () => ({ ...wrongDocument(by, 'route'), type: JSON_TYPE }),
    () => ({ ...wrongGpx(by), type: by.pick([GPX_TYPE, 'application/xml', 'text/xml; charset=utf-8']) }),
    () => ({ ...wrongRouteTable(by), type: CSV_TYPE }),
  ])()

const anySkyBody: Body = (by) =>
  by.isLucky(0.5)
    ? { ...wrongDocument(by, 'sky'), type: JSON_TYPE }
    : { ...wrongSkyTable(by), type: `${CSV_TYPE}; charset=utf-8` }

const coastDown: Door = {
  name: 'POST coast-down',
  count: 200,
  takesDocuments: true,
  attempt(by) {
    const { query, type, ...wrong } = wrongCoastDown(by)
    return sent('POST', `/api/v1/coast-down${query}`, type, wrong, { touches: null, yields: null })
  },
}

/** Every address that takes a car, route, race or sky. */
export const DOCUMENT_DOORS: Door[] = [
  saving('PUT car as JSON', 'car', 280, JSON_TYPE, (by) => wrongDocument(by, 'car')),
  saving('PUT route as JSON', 'route', 180, JSON_TYPE, (by) => wrongDocument(by, 'route')),
  saving('PUT race as JSON', 'race', 240, JSON_TYPE, (by) => wrongDocument(by, 'race')),
  saving('PUT sky as JSON', 'sky', 220, JSON_TYPE, (by) => wrongDocument(by, 'sky')),
  saving('PUT route as GPX', 'route', 200, GPX_TYPE, wrongGpx),
  saving('PUT route as CSV', 'route', 180, CSV_TYPE, wrongRouteTable),
  saving('PUT sky as CSV', 'sky', 200, CSV_TYPE, wrongSkyTable),
  reading('POST routes/read', 'route', 180, anyRouteBody),
  coastDown,
  reading('POST skies/read', 'sky', 160, anySkyBody),
]
