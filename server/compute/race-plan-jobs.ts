import type { RacePlanDocument } from '../documents/race-plan.ts'
import { raceGistOf, type RacePlanGist } from '../documents/race-plan-gist.ts'
import { racePlanDocuments } from '../documents/race-plan-model.ts'
import { racePlanRequest, raceWanted } from '../documents/race-plan-request.ts'
import { fitting } from './fitting.ts'
import { openRequest, readOpenRequest } from './forecast-jobs.ts'
import { checked } from './read-json.ts'
import type { Progress } from './serve-jobs.ts'

/** A race plan request whose documents stand in it or are named by their ids. */
export const openRacePlanRequest = openRequest
  .omit({ speeds: true, date: true, until: true })
  .extend(raceWanted.shape)
  .meta({ title: 'Open race plan request' })

/** The race plan request in a body, checked: documents that it only names are left as `{ id }`, what is wanted stands apart. */
export function readRacePlanRequest(input: { bytes: Uint8Array }) {
  const { car, race, sky, routes, from, ...wanted } = readOpenRequest(
    openRacePlanRequest,
    input.bytes,
    'race plan request',
  )
  return { car, race, sky, routes, from, wanted }
}

/**
 * The plan of a race of whole documents, as JSON.
 *
 * @throws Fault 'invalid-document', or 'cannot-forecast' where the documents do not fit together
 */
export const racePlanJson = (input: unknown, tell?: Tell): string => JSON.stringify(racePlanOf(input, tell))

/**
 * The same as it is kept: as JSON and, for lists, in short.
 *
 * @throws Fault as racePlanJson
 */
export function keptRacePlan(input: unknown, tell?: Tell): { text: string; gist: RacePlanGist } {
  const plan = racePlanOf(input, tell)
  return { text: JSON.stringify(plan), gist: raceGistOf(plan) }
}

type Tell = (progress: Progress) => void

function racePlanOf(input: unknown, tell?: Tell): RacePlanDocument {
  const request = checked(racePlanRequest, input, 'race plan request')
  return fitting(() => racePlanDocuments(request, tell))
}
