import type { Request } from '../api/service.ts'
import { WHOLE } from './bases.ts'
import { changedAt, type Path, written } from './json-path.ts'

const forecast = (path: Path, change: (value: unknown) => unknown): Request => ({
  method: 'POST',
  url: '/api/v1/forecast',
  headers: { 'content-type': 'application/json' },
  payload: written(changedAt(WHOLE, path, change)),
})

const put = (path: Path, change: (value: unknown) => unknown): Request => ({
  method: 'PUT',
  url: '/api/v1/cars/mended',
  headers: { 'content-type': 'application/json' },
  payload: written(changedAt(WHOLE.car, path, change)),
})

const withKey = (key: string) => (value: unknown) => ({ ...Object(value), [key]: 1 })

/** What this suite once found: the request, its status and code, and the field that must be named. */
export const MENDED: [string, Request, number, string, string][] = [
  [
    'half a character in an inner name',
    put(['panels', 0, 'name'], () => 'a\ud83d'),
    422,
    'invalid-document',
    'panels[0].name',
  ],
  [
    'half a character that is only reckoned with',
    forecast(['sky', 'name'], () => '\ude00'),
    422,
    'invalid-document',
    'sky.name',
  ],
  [
    'half a character in an option',
    {
      method: 'POST',
      url: `/api/v1/routes/read?options=${encodeURIComponent('{"name":"\\ud83d"}')}`,
      headers: { 'content-type': 'text/csv' },
      payload: 'lat,lon\n-23.5,17\n-23.4,17\n',
    },
    400,
    'bad-query',
    'name',
  ],
  ['a record’s silent key', forecast(['routes'], withKey('__proto__')), 422, 'invalid-document', 'routes.__proto__'],
  ['a silent cell type', put(['cellTypes'], withKey('__proto__')), 422, 'invalid-document', 'cellTypes.__proto__'],
  ['a field without a name', put(['body'], withKey('')), 422, 'invalid-document', 'body.""'],
  ['a parameter without a name', { url: '/api/v1/cars?=1' }, 400, 'bad-query', '""'],
  ['an id of a hundred letters', { url: `/api/v1/cars/${'a'.repeat(101)}` }, 400, 'bad-id', 'id'],
  [
    'a field with a name of 50,000 letters',
    put(['body'], withKey('k'.repeat(50_000))),
    422,
    'invalid-document',
    `body.${'k'.repeat(80)}…`,
  ],
  [
    'a tracker with a name of 100,000 letters',
    put(['trackers', 0, 'name'], () => 'x'.repeat(100_000)),
    422,
    'invalid-document',
    'trackers[0].name',
  ],
]
