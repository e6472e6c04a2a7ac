import { DateTime } from 'luxon'
import { InputError } from '../engine/input-error.ts'

/**
 * The instant of a local time.
 *
 * @param field  field of the document, for messages
 * @throws InputError when the clock skips that time on that date; an hour that comes twice is taken the first time
 */
export function instantMs(date: string, time: string, zone: string, field: string): number {
  const [hour, minute, second = 0] = time.split(':').map(Number)
  const [year, month, day] = date.split('-').map(Number)
  const at = DateTime.fromObject({ year, month, day, hour, minute, second }, { zone })
  if (!at.isValid || at.day !== day || at.hour !== hour || at.minute !== minute)
    throw new InputError('no-such-time', field, `${time} given; the clocks of ${zone} skip it on ${date}`)
  const earlier = at.minus({ hours: 1 })
  const isSecond = earlier.hour === hour && earlier.offset !== at.offset && earlier.minute === minute
  return (isSecond ? earlier : at).toMillis()
}

/** An instant as ISO 8601 with the local offset, to the second. */
export const localIso = (atMs: number, zone: string): string =>
  DateTime.fromMillis(Math.round(atMs / 1000) * 1000, { zone }).toISO({ suppressMilliseconds: true }) as string

/** A time of day for a sentence, HH:MM. */
export const clock = (atMs: number, zone: string): string => DateTime.fromMillis(atMs, { zone }).toFormat('HH:mm')

/** Offset of local time from UTC. [min] */
export const offsetMin = (atMs: number, zone: string): number => DateTime.fromMillis(atMs, { zone }).offset
