/**
 * Path of the first field in which two documents differ once written as JSON; null when they are the same.
 * The order of fields does not count.
 */
export function firstDifference(before: unknown, after: unknown): string | null {
  return differing(written(before), written(after), '')
}

const written = (value: unknown): unknown => (value === undefined ? undefined : JSON.parse(JSON.stringify(value)))

function differing(before: unknown, after: unknown, path: string): string | null {
  if (!isObject(before) || !isObject(after)) return before === after ? null : path
  const keys = new Set([...Object.keys(after), ...Object.keys(before)])
  for (const key of keys) {
    const found = differing(before[key], after[key], path === '' ? key : `${path}.${key}`)
    if (found !== null) return found
  }
  return null
}

const isObject = (value: unknown): value is Record<string, unknown> => typeof value === 'object' && value !== null
