import { type Answer, ask, BASE, itemsOf, json } from './api.ts'
import type { RacePlanAnswer, RacePlanEntry, RaceWanted } from './race-types.ts'

/** A race with the car and the sky that it is planned with. */
export interface RaceSetting {
  race: string
  carId: string
  skyId: string
}

export const orderRacePlan = ({ race, ...of }: RaceSetting & RaceWanted): Promise<Answer<RacePlanAnswer>> =>
  ask(`${BASE}/races/${race}/race-plans`, { method: 'POST', ...json(of) })

export const racePlanOf = (id: string): Promise<Answer<RacePlanAnswer>> => ask(`${BASE}/race-plans/${id}`)

/** The race's last race plans, newest first, without their bodies. */
export const racePlansOf = (race: string): Promise<Answer<RacePlanEntry[]>> =>
  itemsOf(`${BASE}/races/${race}/race-plans`)

export const cancelRacePlan = (id: string): Promise<Answer<RacePlanAnswer>> =>
  ask(`${BASE}/race-plans/${id}`, { method: 'DELETE' })

export const raceEventsAt = (race: string): string => `${BASE}/races/${race}/events`
