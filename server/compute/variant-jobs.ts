import { type PlanRequest, planRequest } from '../documents/plan-request.ts'
import type { Problem } from '../documents/problem.ts'
import { type VariantAnswer, type VariantDocument, variantList, variantsRequest } from '../documents/variant.ts'
import { patched } from '../documents/variant-day.ts'
import { planBase, planVariant, type VariantBase, type VariantPlan } from '../documents/variant-plan.ts'
import { InputError } from '../engine/input-error.ts'
import { counted, Fault } from '../errors.ts'
import { fitting } from './fitting.ts'
import { openRequest, readOpenRequest } from './forecast-jobs.ts'
import { checked } from './read-json.ts'

/** A variants request whose documents stand in it or are named by their ids. */
export const openVariants = openRequest
  .omit({ speeds: true })
  .extend(
    variantsRequest.pick({
      date: true,
      targetPct: true,
      byTime: true,
      spreads: true,
      members: true,
      seed: true,
      variants: true,
    }).shape,
  )
  .meta({ title: 'Open variants request' })

/** The request in a body, checked: documents that it only names are left as `{ id }`, what is wanted stands apart. */
export function readVariants(input: { bytes: Uint8Array }) {
  const { car, race, sky, routes, date, from, until, variants, ...wanted } = readOpenRequest(
    openVariants,
    input.bytes,
    'variants request',
  )
  return { car, race, sky, routes, date, from, until, wanted, variants }
}

/** A plan request with documents as they were stored or sent. */
export interface VariantInput {
  request: unknown
  variant: VariantDocument
  /** Its place in the order, for messages. */
  index: number
  base: VariantBase
}

const asked = (request: unknown): PlanRequest => checked(planRequest, request, 'plan request')

/**
 * Variants of a day, checked as far as documents go: what they are and what their patches make of the documents.
 *
 * @throws Fault 'invalid-document' that names variant, field, value and what was expected
 */
export function checkVariants({ request, variants }: { request: unknown; variants: unknown }): VariantDocument[] {
  const given = checked(variantList, variants, 'list of variants')
  const whole = asked(request)
  const problems = given.map((variant) => patched(whole, variant).problems)
  const first = problems.findIndex((some) => some.length > 0)
  if (first < 0) return given
  throw new Fault(
    'invalid-document',
    `The variant ${JSON.stringify(given[first].name)} has ${counted(problems[first].length, 'problem')}.`,
    { errors: problems.flatMap((some, i) => some.map((one) => inVariant(one, i))) },
  )
}

const inVariant = (problem: Problem, i: number): Problem => ({ ...problem, field: `variants[${i}].${problem.field}` })

/**
 * The day without any change, planned.
 *
 * @throws Fault 'invalid-document', or 'cannot-forecast' where the documents do not fit together
 */
export const variantBaseJob = ({ request }: { request: unknown }): VariantBase =>
  fitting(() => planBase(asked(request)))

/**
 * One variant, or as many of its changes as are asked for, planned.
 *
 * @throws Fault 'cannot-forecast' that names the variant, where what it makes does not fit together
 */
export function variantJob(input: VariantInput): VariantPlan & Pick<VariantAnswer, 'assumptions' | 'atBaseSpeeds'> {
  const request = asked(input.request)
  try {
    return planVariant(request, input.variant, input.base)
  } catch (error) {
    if (!(error instanceof InputError)) throw error
    const { detail } = error
    const field = `variants[${input.index}].${error.field}`
    throw new Fault(
      'cannot-forecast',
      `The variant ${JSON.stringify(input.variant.name)}, ${error.field}: ${detail}.`,
      {
        errors: [{ field, detail }],
      },
    )
  }
}
