import { DateTime } from 'luxon'
import { InputError } from '../engine/input-error.ts'

const DAY_MS = 86_400_000

/**
 * The instant of a local time.
 *
 * @param field  field of the document, for messages
 * @throws InputError when the clock skips that time on that date; a time that comes twice is taken the first time
 */
export function instantMs(date: string, time: string, zone: string, field: string): number {
  const [hour, minute, second = 0] = time.split(':').map(Number)
  const wallMs = Date.parse(`${date}T00:00:00Z`) + ((hour * 60 + minute) * 60 + second) * 1000
  // A clock that is set in between shows one of these two offsets.
  const candidates = [wallMs - DAY_MS, wallMs + DAY_MS].map((nearMs) => wallMs - offsetMin(nearMs, zone) * 60_000)
  const real = candidates.filter((atMs) => atMs + offsetMin(atMs, zone) * 60_000 === wallMs)
  if (real.length > 0) return Math.min(...real)
  throw new InputError('no-such-time', field, `${time} given; the clocks of ${zone} skip it on ${date}`)
}

/** An instant as ISO 8601 with the local offset, to the second. */
export const localIso = (atMs: number, zone: string): string =>
  DateTime.fromMillis(Math.round(atMs / 1000) * 1000, { zone }).toISO({ suppressMilliseconds: true }) as string

/** A time of day for a sentence, HH:MM. */
export const clock = (atMs: number, zone: string): string => DateTime.fromMillis(atMs, { zone }).toFormat('HH:mm')

/** Time of day, to the nearest minute, of an instant that carries its offset: HH:MM. */
export const clockOf = (at: string): string =>
  DateTime.fromISO(at, { setZone: true }).plus({ seconds: 30 }).toFormat('HH:mm')

/** A day of the calendar for a sentence: Sat 17 Oct. */
export const dayName = (date: string): string =>
  DateTime.fromISO(date, { zone: 'utc' }).setLocale('en-GB').toFormat('ccc d LLL')

/** Offset of local time from UTC. [min] */
export const offsetMin = (atMs: number, zone: string): number => DateTime.fromMillis(atMs, { zone }).offset
