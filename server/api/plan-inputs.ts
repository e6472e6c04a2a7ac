import type { Needs } from './api.ts'
import { gather, learnedLosses, versionsOf } from './make-forecast.ts'

/** A plan by the ids of its documents. */
export interface PlanOf {
  raceId: string
  carId: string
  skyId: string
  date: string
  /** Target, spreads and the like. */
  wanted: object
}

/**
 * All that a plan is worked out from, as it is stored now, and the versions of it.
 *
 * @throws Fault 'no-such-document', 'missing-document' or 'missing-route'
 */
export async function planInputs(needs: Needs, { raceId, carId, skyId, date, wanted }: PlanOf) {
  const { race, car, sky, routes } = await gather(needs, raceId, { carId, skyId })
  const bodies = Object.fromEntries([...routes].map(([id, route]) => [id, route.body]))
  const learned = await learnedLosses(needs, race.id, car)
  return {
    inputs: { car: car.body, race: race.body, sky: sky.body, routes: bodies, date, learned, ...wanted },
    versions: versionsOf({ race, car, sky, routes }),
  }
}
