/** Thin space that does not break: between digit groups and before a unit. */
export const THIN = '\u202f'
const MINUS = '\u2212'

/** A whole number with thin spaces between thousands and a true minus: −1 240. */
export function grouped(value: number): string {
  const digits = String(Math.abs(Math.round(value))).replace(/\B(?=(\d{3})+$)/g, THIN)
  return Math.round(value) < 0 ? MINUS + digits : digits
}

/** A whole number that always shows its sign: +310, −84, 0. */
export const signed = (value: number): string => (Math.round(value) > 0 ? `+${grouped(value)}` : grouped(value))

/** Wh as the screens print it: to the nearest 10. */
export const round10 = (wh: number): number => Math.round(wh / 10) * 10 + 0

/** Wh to 10 with thin spaces, without its unit. */
export const whText = (wh: number): string => grouped(round10(wh))

/** Minutes east of UTC that an instant carries in its text; 0 for Z. */
export function offsetMinOf(at: string): number {
  const match = /([+-])(\d{2}):(\d{2})$/.exec(at)
  if (match === null) return 0
  const minutes = Number(match[2]) * 60 + Number(match[3])
  return match[1] === '-' ? -minutes : minutes
}

/** Local time of day to the minute: 16:48. */
export const clockAt = (atMs: number, offsetMin: number): string =>
  new Date(Math.round(atMs / 60_000) * 60_000 + offsetMin * 60_000).toISOString().slice(11, 16)

/** Local time of day of an instant that carries its offset. */
export const clock = (at: string): string => clockAt(Date.parse(at), offsetMinOf(at))

/** Local time of day, with its offset where the day's clock shows another: 14:30 UTC+9:30. */
export function clockOn(at: string, dayOffsetMin: number): string {
  const offsetMin = offsetMinOf(at)
  return offsetMin === dayOffsetMin ? clock(at) : `${clock(at)}${THIN}${offsetText(offsetMin)}`
}

/** UTC+2, UTC−3:30, UTC. */
export function offsetText(offsetMin: number): string {
  if (offsetMin === 0) return 'UTC'
  const minutes = Math.abs(offsetMin) % 60
  const rest = minutes === 0 ? '' : `:${String(minutes).padStart(2, '0')}`
  return `UTC${offsetMin < 0 ? MINUS : '+'}${Math.floor(Math.abs(offsetMin) / 60)}${rest}`
}

const DAY = new Intl.DateTimeFormat('en-GB', { weekday: 'short', day: 'numeric', month: 'short', timeZone: 'UTC' })

/** Sat 18 Oct, from 2025-10-18. */
export const dayText = (date: string): string => DAY.format(new Date(`${date}T12:00:00Z`)).replace(',', '')

/** Sat 18 Oct 04:00, local to the instant’s own offset. */
export const stampText = (at: string): string =>
  `${dayText(new Date(Date.parse(at) + offsetMinOf(at) * 60_000).toISOString().slice(0, 10))} ${clock(at)}`

/** The offset of a zone at an instant; 0 where the browser does not know the zone. [min] */
export function zoneOffsetMin(zone: string, atMs: number): number {
  try {
    const parts = new Intl.DateTimeFormat('en-GB', { timeZone: zone, timeZoneName: 'longOffset' }).formatToParts(atMs)
    const name = parts.find((part) => part.type === 'timeZoneName')?.value ?? ''
    return offsetMinOf(name.replace('GMT', '').replace(MINUS, '-'))
  } catch {
    return 0
  }
}

/** The calendar’s day in a zone at an instant: 2025-10-18. */
export const dateIn = (zone: string, atMs: number): string =>
  new Date(atMs + zoneOffsetMin(zone, atMs) * 60_000).toISOString().slice(0, 10)

/** Sat 18 Oct 04:00, in a zone. */
export function stampIn(zone: string, atMs: number): string {
  const offsetMin = zoneOffsetMin(zone, atMs)
  return `${dayText(new Date(atMs + offsetMin * 60_000).toISOString().slice(0, 10))} ${clockAt(atMs, offsetMin)}`
}

export interface Amount {
  text: string
  unit: string
}

/** How long something took or lies back, in the unit that fits: 40 s, 52 min, 6 h, 3 d. */
export function ageAmount(ms: number): Amount {
  const s = Math.max(0, Math.round(ms / 1000))
  if (s < 90) return { text: String(s), unit: 's' }
  if (s < 90 * 60) return { text: String(Math.round(s / 60)), unit: 'min' }
  if (s < 48 * 3600) return { text: String(Math.round(s / 3600)), unit: 'h' }
  return { text: grouped(Math.round(s / 86_400)), unit: 'd' }
}

/** 12 min, 1 h 05 min. */
export function durationText(minutes: number): string {
  const whole = Math.round(Math.abs(minutes))
  if (whole < 60) return `${whole}${THIN}min`
  return `${Math.floor(whole / 60)}${THIN}h ${String(whole % 60).padStart(2, '0')}${THIN}min`
}

/** Kilometres: one decimal under 10 km, whole above. */
export const kmText = (km: number): string => (Math.abs(km) < 9.95 ? km.toFixed(1).replace('-', MINUS) : grouped(km))

/** A name for machines from a name for people: small letters, digits, hyphens, at most 64. */
export const slugOf = (name: string): string =>
  name
    .normalize('NFKD')
    .replace(/[\u0300-\u036f]/g, '')
    .toLowerCase()
    .replace(/[^a-z0-9]+/g, '-')
    .slice(0, 64)
    .replace(/^-+|-+$/g, '')
