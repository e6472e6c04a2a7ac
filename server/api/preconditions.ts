import type { IncomingHttpHeaders } from 'node:http'
import { Fault } from '../errors.ts'

/** The entity tag of a version. */
export const etag = (version: number | string): string => `"${version}"`

/** Versions that a header names; '*' for any; null where the header is not sent. */
export type Versions = number[] | '*' | null

export const ifMatch = (headers: IncomingHttpHeaders): Versions => versionsIn('If-Match', headers['if-match'])

export const ifNoneMatch = (headers: IncomingHttpHeaders): Versions =>
  versionsIn('If-None-Match', headers['if-none-match'])

// A proxy that compresses makes strong tags weak; a version is the same document either way.
const TAG = /^(?:W\/)?"(\d{1,10})"$/

function versionsIn(name: string, header: string | undefined): Versions {
  if (header === undefined) return null
  if (header.trim() === '*') return '*'
  return header.split(',').map((tag) => {
    const version = TAG.exec(tag.trim())?.[1]
    if (version !== undefined) return Number(version)
    throw new Fault('bad-precondition', `${name} is malformed; expected a version in double quotes, for example "3".`, {
      errors: [{ field: name, value: header.slice(0, 60), detail: 'expected a version in double quotes' }],
    })
  })
}
