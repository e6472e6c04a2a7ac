import type { z } from 'zod'
import { shortened, shownValue } from './problem.ts'
import type { Problem } from './problem.ts'

/** A checked document, or every problem it has. */
export type Checked<T> = { document: T; problems?: undefined } | { document?: undefined; problems: Problem[] }

type Issue = z.core.$ZodIssue

/** Most problems listed for one document; a table of ten thousand wrong cells needs no ten thousand lines. */
export const MOST_PROBLEMS = 100

/** A list of sixty long names says no more than its start; nor does a name of a megabyte. [characters] */
const LONGEST_DETAIL = 400
const LONGEST_NAME = 80

/**
 * What a document means once its defaults are filled in, or every problem with field, value and expectation.
 *
 * @param schema  one of the document schemas
 * @param input   what somebody sent, already parsed from JSON
 */
export function checkDocument<S extends z.ZodType>(schema: S, input: unknown): Checked<z.output<S>> {
  const result = schema.safeParse(input)
  if (result.success) {
    const problems = passedOver(input, [])
    return problems.length === 0 ? { document: result.data } : { problems }
  }
  return { problems: result.error.issues.flatMap((issue) => problemsOf(issue, input)).slice(0, MOST_PROBLEMS) }
}

/** The one name that a record's schema passes over in silence. */
const PASSED_OVER = '__proto__'

/** Only a value that its schema knows is walked, so that its depth has an end. */
function passedOver(value: unknown, path: (string | number)[]): Problem[] {
  if (Array.isArray(value)) return value.flatMap((entry, i) => (isNested(entry) ? passedOver(entry, [...path, i]) : []))
  if (!isNested(value)) return []
  if (Object.hasOwn(value, PASSED_OVER))
    return [{ field: fieldName([...path, PASSED_OVER]), detail: 'unknown field; expected none of this name' }]
  return Object.entries(value).flatMap(([key, entry]) => (isNested(entry) ? passedOver(entry, [...path, key]) : []))
}

const isNested = (value: unknown): value is object => typeof value === 'object' && value !== null

function problemsOf(issue: Issue, input: unknown): Problem[] {
  const path = issue.path as (string | number)[]
  if (issue.code === 'unrecognized_keys')
    return issue.keys.map((key) => ({
      field: fieldName([...path, key]),
      detail: 'unknown field; expected none of this name',
    }))
  if (issue.code === 'invalid_union') {
    const closest = closestBranch(issue.errors as Issue[][], path, input)
    if (closest.length > 0) return closest
  }
  const given = valueAt(input, path)
  const value = shownValue(given === undefined && issue.code === 'custom' ? issue.input : given)
  return [
    {
      field: fieldName(path),
      ...(value === undefined ? {} : { value }),
      detail: shortened(expectation(issue), LONGEST_DETAIL),
    },
  ]
}

/** Of a union's branches the one that fails with the fewest, deepest problems is what the author meant. */
function closestBranch(branches: Issue[][], path: (string | number)[], input: unknown): Problem[] {
  const depth = (issues: Issue[]) => Math.max(...issues.map((i) => i.path.length))
  const best = [...branches].sort((a, b) => a.length - b.length || depth(b) - depth(a))[0] ?? []
  return best.flatMap((issue) => problemsOf({ ...issue, path: [...path, ...issue.path] }, input))
}

function expectation(issue: Issue): string {
  switch (issue.code) {
    case 'invalid_type':
      return `expected ${TYPE_NAMES[issue.expected] ?? issue.expected}`
    case 'too_small':
      return `expected ${bound(issue.origin, issue.inclusive === false ? 'more than' : 'at least', issue.minimum)}`
    case 'too_big':
      return `expected ${bound(issue.origin, issue.inclusive === false ? 'less than' : 'at most', issue.maximum)}`
    case 'invalid_key':
      return `expected as a name ${issue.issues.map((i) => expectation(i).replace(/^expected /, '')).join(' and ')}`
    case 'invalid_union':
      return `expected ${('options' in issue ? (issue.options ?? []) : []).map((o) => JSON.stringify(o)).join(' or ')}`
    case 'invalid_value':
      return `expected ${issue.values.map((v) => JSON.stringify(v)).join(' or ')}`
    default:
      return `expected ${issue.message}`
  }
}

const TYPE_NAMES: Record<string, string> = {
  number: 'a number',
  int: 'a whole number',
  string: 'a text',
  boolean: 'true or false',
  array: 'a list',
  object: 'an object',
  record: 'an object',
}

function bound(origin: string, comparison: string, limit: number | bigint): string {
  if (origin === 'array') return `${comparison} ${limit} entries`
  if (origin === 'string') return `${comparison} ${limit} characters`
  return `${comparison} ${limit}`
}

/** `['panels', 2, 'pitchDeg']` as `panels[2].pitchDeg`; the document itself is `document`. */
export function fieldName(path: readonly PropertyKey[]): string {
  if (path.length === 0) return 'document'
  return path
    .map((step, i) => (typeof step === 'number' ? `[${step}]` : `${i === 0 ? '' : '.'}${shownName(String(step))}`))
    .join('')
}

const shownName = (name: string): string => (name === '' ? '""' : shortened(name, LONGEST_NAME))

function valueAt(input: unknown, path: readonly PropertyKey[]): unknown {
  let value = input
  for (const step of path) {
    if (value === null || typeof value !== 'object' || !Object.hasOwn(value, step)) return undefined
    value = (value as Record<PropertyKey, unknown>)[step]
  }
  return value
}
