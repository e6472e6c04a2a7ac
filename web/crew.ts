import { type Answer, ask, BASE, itemsOf, json, tell } from './api.ts'
import type { SpeedsInput } from '../server/documents/speeds.ts'
import type {
  FollowedBudget,
  FollowedChoice,
  FollowedPointing,
  Move,
  NewShare,
  ReadingAnswer,
  ReadingDocument,
  Share,
  TrackerDayWork,
  Trackers,
} from './crew-types.ts'

/** A day of a race, as addresses name it. */
export interface RaceDay {
  race: string
  date: string
}

/** What is put before the crew. */
export type Chosen = Pick<FollowedChoice, 'carId' | 'skyId' | 'speeds'> & { until?: FollowedChoice['until'] }

const raceAt = (race: string): string => `${BASE}/races/${race}`
const dayAt = ({ race, date }: RaceDay): string => `${raceAt(race)}/days/${date}`
const post = (body: unknown): RequestInit => ({ method: 'POST', ...json(body) })

export const followedOf = (day: RaceDay): Promise<Answer<FollowedChoice>> => ask(`${dayAt(day)}/choice`)

/** Puts a choice before the crew: the first one without a version, another one over the version that was seen. */
export const follow = (day: RaceDay, { until, ...choice }: Chosen, version: number | null): Promise<Answer<object>> =>
  ask(`${dayAt(day)}/choice`, {
    method: 'PUT',
    ...json(until ? { ...choice, until } : choice, version === null ? {} : { 'if-match': `"${version}"` }),
  })

/** Takes the choice back that was seen: nothing is followed then. */
export const unfollow = (day: RaceDay, version: number): Promise<Answer<true>> =>
  tell(`${dayAt(day)}/choice`, { method: 'DELETE', headers: { 'if-match': `"${version}"` } })

export const followedBudget = (day: RaceDay, signal: AbortSignal): Promise<Answer<FollowedBudget>> =>
  ask(`${dayAt(day)}/budget`, { signal })

export const pointingOf = (day: RaceDay): Promise<Answer<FollowedPointing>> => ask(`${dayAt(day)}/pointing`)

export const eventsAt = (day: RaceDay): string => `${dayAt(day)}/events`

/** Every tracker; the day is driven again for its parts where that is asked for. */
export const trackersOf = ({ race, date }: RaceDay, car: string, work: 'yes' | 'no'): Promise<Answer<Trackers>> =>
  ask(`${raceAt(race)}/trackers?${new URLSearchParams({ date, car, work })}`)

/** The trackers through a day that nobody follows yet, at the speeds being tried. */
export const trackersTried = (
  { race, date }: RaceDay,
  tried: { car: string; sky: string; speeds: SpeedsInput },
): Promise<Answer<{ days: TrackerDayWork[] }>> => {
  const [car, sky] = [{ id: tried.car }, { id: tried.sky }]
  return ask(`${BASE}/tracker-report`, post({ car, sky, race: { id: race }, speeds: tried.speeds, date }))
}

/** Sends a reading; the same one sent again is harmless. */
export const send = (race: string, car: string, reading: ReadingDocument): Promise<Answer<ReadingAnswer>> =>
  ask(`${raceAt(race)}/readings?${new URLSearchParams({ car })}`, post(reading))

export const markReading = (race: string, id: string, mark: 'set-aside' | 'take-back'): Promise<Answer<true>> =>
  tell(`${raceAt(race)}/readings/${id}/${mark}`, { method: 'POST' })

/** What moved the budgets of the race’s days, newest first. */
export const movesOf = (race: string): Promise<Answer<Move[]>> => itemsOf(`${raceAt(race)}/history`)

export const believe = (race: string, use: 'bench' | 'learned'): Promise<Answer<true>> =>
  tell(`${raceAt(race)}/belief`, post({ use }))

export const sharesOf = (day: RaceDay): Promise<Answer<Share[]>> => itemsOf(`${dayAt(day)}/shares`)

export const share = (day: RaceDay, name: string): Promise<Answer<NewShare>> =>
  ask(`${dayAt(day)}/shares`, post({ name }))

export const revoke = (day: RaceDay, id: string): Promise<Answer<true>> =>
  tell(`${dayAt(day)}/shares/${id}`, { method: 'DELETE' })
