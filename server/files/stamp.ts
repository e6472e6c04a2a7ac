/** A time as a table wrote it: the wall clock as if it were UTC, and its offset where it said one. */
export interface Stamp {
  wallMs: number
  offsetMin: number | null
}

const DATE_FORMS: [RegExp, (m: string[]) => [string, string, string]][] = [
  [/^(\d{4})-(\d{2})-(\d{2})$/, (m) => [m[1], m[2], m[3]]],
  [/^(\d{4})\/(\d{1,2})\/(\d{1,2})$/, (m) => [m[1], m[2], m[3]]],
  [/^(\d{1,2})\.(\d{1,2})\.(\d{4})$/, (m) => [m[3], m[2], m[1]]],
  [/^(\d{4})(\d{2})(\d{2})$/, (m) => [m[1], m[2], m[3]]],
]
const CLOCK = /^(\d{1,2})(?::?(\d{2})(?::?(\d{2})(?:\.\d+)?)?)?$/
const OFFSET = /\s*(Z|UTC|GMT|[+-]\d{2}(?::?\d{2})?)$/i
/** No time is written longer; patterns are not run over more. [characters] */
const LONGEST = 40
const FIRST_MS = Date.UTC(1950, 0, 1)
const LAST_MS = Date.UTC(2101, 0, 1)

/** A day as UTC milliseconds, years 1950 to 2100; null when it is none or may be read two ways, like 03/04/2026. */
export function dayMs(text: string): number | null {
  for (const [pattern, parts] of DATE_FORMS) {
    const match = pattern.exec(text)
    if (match === null) continue
    const [year, month, day] = parts(match).map(Number)
    const ms = Date.UTC(year, month - 1, day)
    const isReal = new Date(ms).getUTCMonth() === month - 1 && day >= 1
    return isReal && ms >= FIRST_MS && ms < LAST_MS ? ms : null
  }
  return null
}

/** A time of day in milliseconds; 24, 24:00 and 24:00:00 are the next day's midnight. */
export function clockMs(text: string): number | null {
  if (text.length > LONGEST) return null
  const match = CLOCK.exec(text)
  if (match === null) return null
  const [hour, minute, second] = [match[1], match[2] ?? 0, match[3] ?? 0].map(Number)
  if (minute > 59 || second > 59 || hour > 24 || (hour === 24 && minute + second > 0)) return null
  return ((hour * 60 + minute) * 60 + second) * 1000
}

/** A day with a time: ISO 8601 with or without offset, also 17.10.2026 08:00, 2026/10/17 8:00 and 20261017:0800. */
export function stamp(text: string): Stamp | null {
  const bare = text.trim()
  if (bare.length > LONGEST) return null
  const split = /^(\d{4}-\d{2}-\d{2}|\d{4}\/\d{1,2}\/\d{1,2}|\d{1,2}\.\d{1,2}\.\d{4}|\d{8})(?:[T:_]|,?\s+)(.+)$/i.exec(
    bare,
  )
  if (split === null) return null
  const offset = OFFSET.exec(split[2])
  const day = dayMs(split[1])
  const clock = clockMs(offset === null ? split[2] : split[2].slice(0, offset.index))
  if (day === null || clock === null) return null
  const offsetMin = offset === null ? null : offsetMinutes(offset[1])
  return Number.isNaN(offsetMin) ? null : { wallMs: day + clock, offsetMin }
}

/** Minutes east of UTC of `Z`, `UTC`, `+02:00`, `UTC+2` or `-0330`, up to 14 hours; NaN when it is none. */
export function offsetMinutes(text: string): number {
  const match = /^(?:Z|(?:UTC|GMT)?\s*(?:([+-])(\d{1,2})(?::?(\d{2}))?)?)$/i.exec(text.trim())
  if (match === null || text.trim() === '') return Number.NaN
  const minutes = Number(match[2] ?? 0) * 60 + Number(match[3] ?? 0)
  if (minutes > 14 * 60 || Number(match[3] ?? 0) > 59) return Number.NaN
  return match[1] === '-' ? -minutes : minutes
}

/** `+02:00` of 120. */
export function offsetText(minutes: number): string {
  const size = Math.abs(minutes)
  return `${minutes < 0 ? '-' : '+'}${two(Math.floor(size / 60))}:${two(size % 60)}`
}

/** An instant as ISO 8601 at an offset: `2026-10-17T08:00:00+02:00`. */
export const instantText = (atMs: number, offsetMin: number): string =>
  `${new Date(atMs + offsetMin * 60_000).toISOString().slice(0, 19)}${offsetText(offsetMin)}`

const two = (n: number): string => String(n).padStart(2, '0')
