import { signal } from '@preact/signals'
import type { SpeedsInput } from '../server/documents/speeds.ts'
import { documentOf, type Refusal } from './api.ts'
import { followedOf, movesOf, type RaceDay, trackersOf, trackersTried } from './crew.ts'
import type { FollowedChoice, Move, Trackers } from './crew-types.ts'
import { type LogCar, logCar } from './log-reading.ts'

/** The choice that the crew follows on a day; null where none is. */
export interface Followed extends RaceDay {
  choice: FollowedChoice | null
}

export const followed = signal<Followed | null>(null)
/** Counts what the service told about the day: a reading, a forecast, a choice. */
export const news = signal(0)
/** What the service told last about a plan of the day, as JSON. */
export const planNews = signal('')
/** What it told last about a variant of a plan of the day, as JSON. */
export const variantNews = signal('')

/** Reads the followed choice of a day; a lost request leaves the one that is known. */
export async function loadFollowed(day: RaceDay): Promise<Followed | null> {
  const answer = await followedOf(day)
  if (answer.value !== undefined) followed.value = { ...day, choice: answer.value }
  else if (answer.refusal.status === 404) followed.value = { ...day, choice: null }
  return followedOn(day)
}

/** The followed choice as far as it is known for this very day. */
export function followedOn({ race, date }: RaceDay): Followed | null {
  const { value } = followed
  return value?.race === race && value.date === date ? value : null
}

export const car = signal<(LogCar & { id: string }) | null>(null)
export const trackers = signal<Trackers | null>(null)
export const moves = signal<Move[]>([])
export const trackersRefusal = signal<Refusal | null>(null)

/**
 * Reads what Log and Trackers show; what was shown before stays until it is there.
 *
 * @param tried sky and speeds of a day that nobody follows; left out where no day is to be driven
 */
export async function loadTrackers(
  day: RaceDay,
  carId: string,
  tried?: { sky: string; speeds: SpeedsInput },
): Promise<void> {
  const work = tried === undefined ? 'no' : 'yes'
  const [document, report] = await Promise.all([documentOf('cars', carId), trackersOf(day, carId, work)])
  if (document.value !== undefined) {
    const read: Parameters<typeof logCar>[0] = JSON.parse(JSON.stringify(document.value.document))
    car.value = { id: carId, ...logCar(read) }
  }
  if (report.value !== undefined) {
    trackers.value = report.value
    if (tried !== undefined && report.value.work === null) await addTried(day, { car: carId, ...tried }, report.value)
  }
  trackersRefusal.value = report.refusal ?? document.refusal ?? null
}

/** Adds the day at the speeds being tried to a report without one. */
async function addTried(
  day: RaceDay,
  tried: { car: string; sky: string; speeds: SpeedsInput },
  shown: Trackers,
): Promise<void> {
  const { value } = await trackersTried(day, tried)
  if (value !== undefined && trackers.value === shown)
    trackers.value = { ...shown, work: value.days[0] ?? null, isTried: true }
}

export async function loadMoves(race: string): Promise<void> {
  const answer = await movesOf(race)
  if (answer.value !== undefined) moves.value = answer.value
}
