import { createHash } from 'node:crypto'

/**
 * JSON with the names of every object in order, so that equal content gives equal text.
 * (RFC 8785 orders names the same way, by UTF-16 code units.)
 */
export function canonicalJson(value: unknown): string {
  if (Array.isArray(value)) return `[${value.map((item) => canonicalJson(item ?? null)).join(',')}]`
  if (value === null || typeof value !== 'object') return JSON.stringify(value)
  const members = Object.entries(value)
    .filter(([, inner]) => inner !== undefined)
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .map(([name, inner]) => `${JSON.stringify(name)}:${canonicalJson(inner)}`)
  return `{${members.join(',')}}`
}

/** SHA-256 over the canonical JSON of a value, as hexadecimal digits. */
export const fingerprint = (value: unknown): string => createHash('sha256').update(canonicalJson(value)).digest('hex')
