import type { SpeedsInput } from '../server/documents/speeds.ts'
import type { FollowedChoice } from './crew-types.ts'
import { dateIn } from './format.ts'

export const VIEWS = ['day', 'here', 'tonight', 'race-plan', 'stop', 'log', 'trackers', 'set-up', 'coast-down'] as const
export type View = (typeof VIEWS)[number]

/** What a page of the client shows: kept in its address, so that a crew can send it and a reload keeps it. */
export interface Choice {
  view: View
  race: string
  car: string
  sky: string
  date: string
  speeds: SpeedsInput
}

export const LOWEST_KMH = 5
export const HIGHEST_KMH = 200
const FASTEST: SpeedsInput = { kind: 'meet-target' }

/** The choice that an address holds; anything unreadable in it is left at its default. */
export function choiceOf(hash: string): Choice {
  const [view, query = ''] = hash.replace(/^#\/?/, '').split('?')
  const params = new URLSearchParams(query)
  const text = (name: string): string => params.get(name) ?? ''
  return {
    view: VIEWS.find((known) => known === view) ?? 'day',
    race: text('race'),
    car: text('car'),
    sky: text('sky'),
    date: /^\d{4}-\d{2}-\d{2}$/.test(text('date')) ? text('date') : '',
    speeds: speedsOf(text('kmh'), text('legs')),
  }
}

/** The address of a choice. */
export function hashOf(choice: Choice): string {
  const params = new URLSearchParams()
  for (const name of ['race', 'car', 'sky', 'date'] as const) if (choice[name] !== '') params.set(name, choice[name])
  const { speeds } = choice
  if (speeds.kind === 'constant' || speeds.kind === 'legs') params.set('kmh', String(speeds.speedKmh))
  // A plan's speeds are too long for an address: whoever opens it sees what the crew follows.
  if (speeds.kind === 'sections') params.set('speeds', 'followed')
  if (speeds.kind === 'legs') params.set('legs', speeds.legs.map((leg) => `${leg.stage}:${leg.speedKmh}`).join(','))
  const query = params.toString()
  return `#/${choice.view}${query === '' ? '' : `?${query}`}`
}

function speedsOf(kmh: string, legs: string): SpeedsInput {
  const speedKmh = Number(kmh)
  if (!isSpeed(speedKmh)) return FASTEST
  const list = legs
    .split(',')
    .map((leg) => leg.split(':'))
    .filter(([stage, speed]) => /^[a-z0-9-]+$/.test(stage) && isSpeed(Number(speed)))
    .map(([stage, speed]) => ({ stage, speedKmh: Number(speed) }))
  return list.length === 0 ? { kind: 'constant', speedKmh } : { kind: 'legs', speedKmh, legs: list }
}

/** Whether a page shows just what the crew follows. */
export function isSame(shown: Choice, choice: FollowedChoice | null | undefined): boolean {
  if (choice === null || choice === undefined) return false
  const { carId: car, skyId: sky, speeds } = choice
  return (
    hashOf({ ...shown, view: 'day' }) === hashOf({ ...shown, view: 'day', car, sky, speeds }) &&
    sectionsOf(shown.speeds) === sectionsOf(speeds)
  )
}

/** Sections in one order of their fields, which a store does not keep; empty for other speeds. */
export const sectionsOf = (speeds: SpeedsInput): string =>
  speeds.kind !== 'sections'
    ? ''
    : [
        speeds.speedKmh,
        ...speeds.sections.map(({ stage, fromKm, toKm, speedKmh }) => [stage, fromKm, toKm, speedKmh].join(' ')),
      ].join()

/** Whether the crew follows these speeds to the same camp with the same car and sky. */
export const isFollowing = (
  followed: FollowedChoice | null,
  { carId, skyId, speeds, until }: Pick<FollowedChoice, 'carId' | 'skyId' | 'speeds' | 'until'>,
): boolean =>
  followed !== null &&
  followed.carId === carId &&
  followed.skyId === skyId &&
  followed.until?.stage === until?.stage &&
  followed.until?.km === until?.km &&
  followed.speeds.kind === speeds.kind &&
  sectionsOf(followed.speeds) === sectionsOf(speeds)

/** What is followed in a few words. */
export function wayOf(speeds: SpeedsInput): string {
  if (speeds.kind === 'constant') return `${speeds.speedKmh} km/h`
  if (speeds.kind === 'meet-target') return 'the fastest speed'
  return speeds.kind === 'sections' ? 'the speeds of a plan' : 'other speeds'
}

/** Whether a number is a speed that may be asked for. */
export const isSpeed = (kmh: number): boolean => kmh >= LOWEST_KMH && kmh <= HIGHEST_KMH

/** A typed speed as the steppers keep it: a whole number in range, or null. */
export function typedSpeed(text: string): number | null {
  const kmh = Math.round(Number(text.replace(',', '.')))
  return text.trim() !== '' && isSpeed(kmh) ? kmh : null
}

/** The day asked for, else today’s, else the next one, else the first; empty where there is none. */
export function dayToShow(items: { date: string; zone: string }[], wanted: string, atMs: number): string {
  const found = items.find((day) => day.date === wanted)
  const next = items.find((day) => day.date >= dateIn(day.zone, atMs))
  return (found ?? next ?? items[0])?.date ?? ''
}
