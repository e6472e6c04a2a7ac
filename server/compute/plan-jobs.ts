import { planDocuments } from '../documents/plan-day.ts'
import type { PlanDocument } from '../documents/plan.ts'
import { gistOf, type PlanGist } from '../documents/plan-gist.ts'
import { planRequest } from '../documents/plan-request.ts'
import { fitting } from './fitting.ts'
import { fingerprint } from './fingerprint.ts'
import { readOpenRequest, openRequest } from './forecast-jobs.ts'
import { checked } from './read-json.ts'
import type { Progress } from './serve-jobs.ts'

/** One hash over the content of everything that a plan is made from. */
export const planHash = (input: Record<string, unknown>): string => fingerprint(input)

/** A plan request whose documents stand in it or are named by their ids. */
export const openPlanRequest = openRequest
  .omit({ speeds: true })
  .extend(
    planRequest.pick({
      date: true,
      targetPct: true,
      objective: true,
      byTime: true,
      spreads: true,
      promisePct: true,
      members: true,
      seed: true,
    }).shape,
  )
  .meta({ title: 'Open plan request' })

/** The plan request in a body, checked: documents that it only names are left as `{ id }`, what is wanted stands apart. */
export function readPlanRequest(input: { bytes: Uint8Array }) {
  const { car, race, sky, routes, date, from, until, ...wanted } = readOpenRequest(
    openPlanRequest,
    input.bytes,
    'plan request',
  )
  return { car, race, sky, routes, date, from, until, wanted }
}

/**
 * The plan of whole documents, as JSON.
 *
 * @throws Fault 'invalid-document', or 'cannot-forecast' where the documents do not fit together
 */
export const planJson = (input: unknown, tell?: Tell): string => JSON.stringify(planOf(input, tell))

/**
 * The same as it is kept: as JSON and, for lists, in short.
 *
 * @throws Fault as planJson
 */
export function keptPlan(input: unknown, tell?: Tell): { text: string; gist: PlanGist } {
  const plan = planOf(input, tell)
  return { text: JSON.stringify(plan), gist: gistOf(plan) }
}

type Tell = (progress: Progress) => void

function planOf(input: unknown, tell?: Tell): PlanDocument {
  const request = checked(planRequest, input, 'plan request')
  return fitting(() => planDocuments(request, tell))
}
