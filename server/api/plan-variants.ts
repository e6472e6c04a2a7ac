import { z } from 'zod'
import { checked, readJson } from '../compute/read-json.ts'
import { variantAnswer, variantDocument, variantList } from '../documents/variant.ts'
import { ENGINE_VERSION } from '../engine/version.ts'
import { Fault } from '../errors.ts'
import type { StoredPlan } from '../store/plan-store.ts'
import type { StoredVariant } from '../store/variant-store.ts'
import { answers, COMPUTE_ERRORS, listOf, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { planInputs } from './plan-inputs.ts'
import type { VariantDesk } from './variant-desk.ts'
import { VARIANTS_DESCRIPTION } from './variants.ts'

const variantEntry = z.strictObject({
  id: z.string(),
  planId: z.string(),
  name: z.string(),
  variant: variantDocument.describe('what it changes'),
  inputsHash: z.string().describe('SHA-256 over the canonical JSON of everything the variant is made from'),
  engineVersion: z.string(),
  state: z.enum(['working', 'done', 'failed', 'cancelled']),
  fault: z.strictObject({ code: z.string(), detail: z.string() }).nullable().describe('why it failed'),
  startedAt: z.string().describe('instant (ISO 8601, UTC)'),
  endedAt: z.string().nullable().describe('instant (ISO 8601, UTC)'),
  answer: variantAnswer.nullable().describe('the variant beside its plan; null until it is done'),
})

const newVariants = z.strictObject({ variants: variantList }).meta({ title: 'New variants' })
const noQuery = z.strictObject({})
const idOf = (what: string) => z.strictObject({ id: z.uuid({ error: 'a UUID' }).describe(`the ${what}’s id`) })

/** Variants beside a stored plan: ordered, worked out in the background, kept. */
export function planVariantRoutes(api: Api, needs: Needs, desk: VariantDesk): void {
  takeBodies(api, ['json'])
  orderRoute(api, needs, desk)
  listRoute(api, needs)
  oneRoutes(api, needs, desk)
}

function orderRoute(api: Api, needs: Needs, desk: VariantDesk): void {
  const { compute, store } = needs
  const schema = {
    tags: ['plans'],
    summary: 'Order variants of a stored plan',
    description: `${VARIANTS_DESCRIPTION} Each is worked out in the background; the day’s event stream tells how far it is. The same variant of the same plan is worked out once. The documents must still be those that the plan was made from.`,
    params: idOf('plan'),
    querystring: noQuery,
    body: newVariants,
    response: answers(
      {
        200: { description: 'these variants are there already', schema: listOf(variantEntry) },
        202: { description: 'being worked out', schema: listOf(variantEntry) },
      },
      [
        'bad-id',
        'bad-query',
        'bad-json',
        'empty-body',
        'invalid-document',
        'no-such-plan',
        'no-such-document',
        'missing-document',
        'missing-route',
        'plan-unfinished',
        'plan-outdated',
        'cannot-forecast',
        ...WRITE_ERRORS,
        ...COMPUTE_ERRORS,
        ...STORE_ERRORS,
      ],
    ),
  }
  api.post('/plans/:id/variants', { schema, bodyLimit: DOCUMENT_LIMIT }, async (asked, reply) => {
    const signal = clientGone(reply)
    const plan = await donePlan(needs, asked.params.id)
    const { variants: given } = checked(newVariants, readJson(bytesOf(asked.body)), 'order')
    const request = await sameInputs(needs, plan)
    const variants = await compute.run('check-variants', { request, variants: given }, signal)
    const ids = await desk.order({ plan, variants, request })
    const kept = await Promise.all(ids.map((id) => store.variants.get(id)))
    const items = kept.flatMap((one) => (one === null ? [] : [entryOf(one)]))
    return reply.code(items.some(({ state }) => state === 'working') ? 202 : 200).send({ items })
  })
}

/** @throws Fault 'no-such-plan' or 'plan-unfinished' */
async function donePlan({ store }: Needs, id: string): Promise<StoredPlan> {
  const plan = await store.plans.get(id)
  if (plan === null) throw new Fault('no-such-plan', `There is no plan ${id}.`)
  if (plan.state !== 'done')
    throw new Fault('plan-unfinished', `The plan is ${plan.state}; variants need one that is done.`)
  return plan
}

/**
 * The request that the plan answered, made of the documents as they are now.
 *
 * @throws Fault 'plan-outdated' where they, the readings or the engine have changed since
 */
async function sameInputs(needs: Needs, plan: StoredPlan): Promise<object> {
  const { raceId, carId, skyId, date, engineVersion } = plan
  const wanted = plan.wanted as object
  const { inputs } = await planInputs(needs, { raceId, carId, skyId, date, wanted })
  const inputsHash = await needs.compute.run('plan-hash', inputs)
  if (inputsHash === plan.inputsHash && engineVersion === ENGINE_VERSION) return inputs
  throw new Fault(
    'plan-outdated',
    'Race, car, sky, readings or the engine have changed since this plan; plan the day again.',
  )
}

function listRoute(api: Api, needs: Needs): void {
  const { store } = needs
  const schema = {
    tags: ['plans'],
    summary: 'List the last 50 variants of a plan, newest first',
    params: idOf('plan'),
    querystring: noQuery,
    response: answers({ 200: { description: 'its variants', schema: listOf(variantEntry) } }, [
      'bad-id',
      'bad-query',
      'no-such-plan',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/plans/:id/variants', { schema }, async ({ params }, reply) => {
    if ((await store.plans.get(params.id)) === null) throw new Fault('no-such-plan', `There is no plan ${params.id}.`)
    reply.header('cache-control', 'no-cache')
    return { items: (await store.variants.list(params.id)).map(entryOf) }
  })
}

function oneRoutes(api: Api, needs: Needs, desk: VariantDesk): void {
  const getSchema = {
    tags: ['plans'],
    summary: 'Get a variant, or how far it is',
    params: idOf('variant'),
    querystring: noQuery,
    response: answers({ 200: { description: 'the variant', schema: variantEntry } }, [
      'bad-id',
      'bad-query',
      'no-such-variant',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/variants/:id', { schema: getSchema }, async ({ params }, reply) => {
    reply.header('cache-control', 'no-cache')
    return variantOf(needs, params.id)
  })

  const cancelSchema = {
    tags: ['plans'],
    summary: 'Take a variant back that is being worked out; one that is done stays',
    params: idOf('variant'),
    querystring: noQuery,
    response: answers({ 200: { description: 'the variant as it is now', schema: variantEntry } }, [
      'bad-id',
      'bad-query',
      'no-such-variant',
      ...WRITE_ERRORS,
      ...STORE_ERRORS,
    ]),
  }
  api.delete('/variants/:id', { schema: cancelSchema }, async ({ params }) => {
    await variantOf(needs, params.id)
    await desk.cancel(params.id)
    return variantOf(needs, params.id)
  })
}

const entryOf = ({ variant, answer, ...entry }: StoredVariant): z.input<typeof variantEntry> => ({
  ...entry,
  variant: variant as z.input<typeof variantDocument>,
  answer: answer as z.input<typeof variantAnswer> | null,
})

async function variantOf({ store }: Needs, id: string): Promise<z.input<typeof variantEntry>> {
  const stored = await store.variants.get(id)
  if (stored === null) throw new Fault('no-such-variant', `There is no variant ${id}.`)
  return entryOf(stored)
}
