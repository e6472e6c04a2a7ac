import { z } from 'zod'

/** A finite number in a closed range; the description carries meaning and unit into the published schema. */
export const quantity = (min: number, max: number, meaning: string) => z.number().min(min).max(max).describe(meaning)

/** A whole number in a closed range. */
export const count = (min: number, max: number, meaning: string) => z.int().min(min).max(max).describe(meaning)

/** A name for people: one line, 1 to 80 characters. */
export const label = (meaning: string) =>
  z
    .string()
    .min(1)
    .max(80)
    // oxlint-disable-next-line no-control-regex -- control characters are exactly what is refused here
    .regex(/^[^\u0000-\u001f\u007f]*$/, 'one line of text without control characters')
    .refine((text) => !/\p{Surrogate}/u.test(text), 'whole characters; half of one stands here')
    .describe(meaning)

/** A name for machines: small letters, digits and hyphens, 1 to 64 characters. */
export const slug = (meaning: string) =>
  z
    .string()
    .regex(/^[a-z0-9](?:[a-z0-9-]{0,62}[a-z0-9])?$/, 'small letters, digits and hyphens, 1 to 64 characters')
    .describe(meaning)

/** An instant: ISO 8601 with an explicit offset, years 1950 to 2100. */
export const instant = (meaning: string) =>
  z.iso
    .datetime({ offset: true, error: 'an instant as ISO 8601 with offset, for example 2026-10-17T08:00:00+02:00' })
    .refine((text) => inYears(Date.parse(text)), 'an instant between the years 1950 and 2100')
    .describe(meaning)

const inYears = (atMs: number): boolean => atMs >= Date.UTC(1950, 0, 1) && atMs < Date.UTC(2101, 0, 1)

/** A day of the calendar, years 1950 to 2100. */
export const date = (meaning: string) =>
  z.iso
    .date({ error: 'a date as YYYY-MM-DD', abort: true })
    .refine((text) => inYears(Date.parse(text)), 'a date between the years 1950 and 2100')
    .describe(meaning)

/** A local time of day. */
export const timeOfDay = (meaning: string) =>
  z
    .string()
    .regex(/^(?:[01]\d|2[0-3]):[0-5]\d(?::[0-5]\d)?$/, 'a local time as HH:MM or HH:MM:SS')
    .describe(meaning)

/** A local time of day with its seconds, so that times compare as text. */
export const withSeconds = (time: string): string => (time.length === 5 ? `${time}:00` : time)

/** A time zone by its IANA name. */
export const zoneName = (meaning: string) =>
  label(meaning).refine(isZone, 'an IANA time zone, for example Africa/Windhoek')

/** Zones that were asked for before: the library takes a millisecond for each. */
const known = new Set<string>()

function isZone(name: string): boolean {
  if (known.has(name)) return true
  if (!isNewZone(name)) return false
  known.add(name)
  return true
}

function isNewZone(name: string): boolean {
  try {
    return (
      /^(?:UTC|[A-Za-z_]+(?:\/[A-Za-z0-9_+-]+)+)$/.test(name) && Intl.DateTimeFormat('en', { timeZone: name }) !== null
    )
  } catch {
    return false
  }
}
