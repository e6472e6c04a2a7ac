import { changedAt, isObject, type Path } from './json-path.ts'

type Body = string | Buffer

/** Most requests that are spent on making one smaller. */
const MOST_TRIES = 300
const MOST_MS = 10_000

/**
 * A smaller body that still fails: parts of the document left out, or pieces of the text cut away, as long
 * as the failure stays.
 */
export async function shrunk(body: Body, stillFails: (smaller: Body) => Promise<boolean>): Promise<Body> {
  let tries = MOST_TRIES
  const until = performance.now() + MOST_MS
  let best = body
  for (let isSmaller = true; isSmaller && tries > 0; ) {
    isSmaller = false
    for (const candidate of smallerThan(best)) {
      if (--tries <= 0 || performance.now() > until) return best
      if (!(await stillFails(candidate))) continue
      best = candidate
      isSmaller = true
      break
    }
  }
  return best
}

function* smallerThan(body: Body): Generator<Body> {
  const document = parsed(body)
  if (document !== undefined)
    for (const path of pathsOf(document, [])) yield JSON.stringify(changedAt(document, path, () => undefined))
  // Numbers beyond a double are lost in a document, so a text is cut as well.
  for (let size = body.length >> 1; size >= Math.max(1, body.length >> 6); size >>= 1)
    for (let at = 0; at < body.length; at += size) yield without(body, at, at + size)
}

const without = (body: Body, from: number, to: number): Body =>
  typeof body === 'string'
    ? body.slice(0, from) + body.slice(to)
    : Buffer.concat([body.subarray(0, from), body.subarray(to)])

function parsed(body: Body): unknown {
  try {
    return JSON.parse(body.toString())
  } catch {
    return undefined
  }
}

/** Places of a document, the outer ones first. */
function pathsOf(value: unknown, path: Path): Path[] {
  const keys: Path = Array.isArray(value) ? [...value.keys()] : isObject(value) ? Object.keys(value) : []
  const inner = keys.map((key): Path => [...path, key])
  const deeper = inner.flatMap((at) => pathsOf(Object(value)[at[at.length - 1]], at))
  return [...inner, ...deeper]
}
