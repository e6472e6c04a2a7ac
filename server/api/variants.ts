import { z } from 'zod'
import { openVariants } from '../compute/variant-jobs.ts'
import { variantsDocument, type VariantsDocument } from '../documents/variant.ts'
import { ENGINE_VERSION } from '../engine/version.ts'
import { answers } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { STATELESS_ERRORS, wholeRequest } from './stateless-forecast.ts'
import { workVariant } from './work-variants.ts'

export const VARIANTS_DESCRIPTION =
  'A variant changes car, race or sky by a merge patch (RFC 7386), numbers as a what-if does, or brings speeds of its own. Each is planned in full and judged by the forecast, over the same days drawn as the base. Of the later arrival every change has its part, made one after the other; of the closing balance every line of the ledger, at the speeds of each and at the base’s: the parts add up.'

/** Variants of a day of documents that come with the request, or are named in it; nothing is saved. */
export function statelessVariantsRoute(api: Api, needs: Needs): void {
  const { compute } = needs
  takeBodies(api, ['json'])
  const schema = {
    tags: ['plans'],
    summary: 'Plan variants of a day in full beside its plan; nothing is saved',
    description: `${VARIANTS_DESCRIPTION} Takes the body of /plan, and up to 12 variants; each takes seconds for each of its changes, so many are better ordered beside a stored plan.`,
    querystring: z.strictObject({}),
    body: openVariants,
    response: answers({ 200: { description: 'base and variants', schema: variantsDocument } }, STATELESS_ERRORS),
  }
  api.post('/variants', { schema, bodyLimit: DOCUMENT_LIMIT }, async (asked, reply): Promise<VariantsDocument> => {
    const signal = clientGone(reply)
    const read = await compute.run('read-variants', { bytes: bytesOf(asked.body) }, signal)
    const { wanted, variants: given, ...open } = read
    const whole = await wholeRequest(needs, { ...open, speeds: { kind: 'constant', speedKmh: 70 } }, signal)
    const { speeds: _speeds, ...documents } = whole
    const request = { ...documents, ...wanted, date: open.date }
    const variants = await compute.run('check-variants', { request, variants: given }, signal)
    const base = await compute.run('variant-base', { request }, signal)
    const worked = []
    for (const [index, variant] of variants.entries())
      worked.push(await workVariant(needs, { request, variant, index }, base, signal))
    return {
      engineVersion: ENGINE_VERSION,
      race: base.race,
      car: base.car,
      date: open.date,
      zone: base.zone,
      members: wanted.members,
      seed: wanted.seed,
      base: { outcome: base.outcome, figures: base.driven?.figures ?? null },
      variants: worked,
    }
  })
}
