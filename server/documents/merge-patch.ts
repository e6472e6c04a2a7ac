import { z } from 'zod'

type Json = unknown

/** Deepest nesting of a patch; no document is deeper than half of it. */
const DEEPEST = 32

/** What a patch must not hold, as an expectation; null where all is well. Walks without recursion. */
function odd(patch: Json): string | null {
  const open: { value: Json; depth: number }[] = [{ value: patch, depth: 0 }]
  for (let at = open.pop(); at !== undefined; at = open.pop()) {
    const { value, depth } = at
    if (typeof value === 'string' && isOddText(value)) return 'texts without control characters'
    if (typeof value !== 'object' || value === null) continue
    if (depth >= DEEPEST) return `objects and lists in each other at most ${DEEPEST} deep`
    for (const [name, inner] of Object.entries(value)) {
      if (name === '__proto__' || isOddText(name)) return 'names without control characters, and none __proto__'
      open.push({ value: inner, depth: depth + 1 })
    }
  }
  return null
}

// oxlint-disable-next-line no-control-regex -- control characters are exactly what is looked for
const isOddText = (text: string): boolean => /[\u0000-\u001f\u007f]|\p{Surrogate}/u.test(text)

/** A JSON merge patch (RFC 7386) of one of the documents; the document that it makes is checked afterwards. */
export const mergePatch = (of: string) =>
  z
    .record(z.string(), z.unknown())
    .superRefine((patch, context) => {
      const expected = odd(patch)
      if (expected !== null) context.addIssue({ code: 'custom', message: expected, input: patch })
    })
    .describe(
      `JSON merge patch (RFC 7386) of the ${of}: objects are merged, null takes a field away, lists and values replace`,
    )

const isObject = (value: Json): value is Record<string, Json> =>
  typeof value === 'object' && value !== null && !Array.isArray(value)

/**
 * A document with a merge patch in it; neither is changed.
 *
 * @param patch  from `mergePatch`, so that its depth has an end
 * @source RFC 7386, JSON Merge Patch, section 2
 */
export function merged(target: Json, patch: Json): Json {
  if (!isObject(patch)) return patch
  const into = new Map(isObject(target) ? Object.entries(target) : [])
  for (const [name, value] of Object.entries(patch)) {
    if (value === null) into.delete(name)
    else into.set(name, merged(into.get(name), value))
  }
  return Object.fromEntries(into)
}
