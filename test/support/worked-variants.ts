import { checkVariants, variantBaseJob, variantJob } from '../../server/compute/variant-jobs.ts'
import type { VariantAnswer } from '../../server/documents/variant.ts'
import { variantAnswerOf } from '../../server/documents/variant-answer.ts'
import type { VariantBase } from '../../server/documents/variant-plan.ts'
import { variantSteps } from '../../server/documents/variant-steps.ts'

/** Variants worked out here, by the jobs that the service runs one after another. */
export function workedVariants(request: unknown, given: object[], base = variantBaseJob({ request })): VariantAnswer[] {
  return checkVariants({ request, variants: given }).map((variant, index) => {
    const work = (some: typeof variant) => variantJob({ request, variant: some, index, base })
    const before = variantSteps(variant)
      .slice(0, -1)
      .map((step) => work(step.variant))
    return variantAnswerOf(variant, base, work(variant), before)
  })
}

/** The base of a request. */
export const workedBase = (request: unknown): VariantBase => variantBaseJob({ request })
