import type { VariantAnswer, VariantDocument } from '../documents/variant.ts'
import { variantAnswerOf } from '../documents/variant-answer.ts'
import type { VariantBase } from '../documents/variant-plan.ts'
import { variantSteps } from '../documents/variant-steps.ts'
import type { Needs } from './api.ts'

/** Is told what is done next, and what share of all is behind. */
export type Tell = (progress: { step: string; share: number }) => void

/** One variant of a plan request, with its place in the order that it came with. */
export interface VariantOrder {
  request: unknown
  variant: VariantDocument
  index: number
}

/**
 * A variant worked out beside its base, one job after another, so that each keeps the time limit and others get their turn.
 *
 * @throws Fault as the jobs do
 */
export async function workVariant(
  { compute }: Pick<Needs, 'compute'>,
  { request, variant, index }: VariantOrder,
  base: VariantBase,
  signal: AbortSignal,
  tell: Tell = () => {},
): Promise<VariantAnswer> {
  const steps = variantSteps(variant)
  const before = steps.slice(0, -1)
  const count = before.length + 1
  const plans = []
  for (const [i, step] of before.entries()) {
    tell({ step: `Planning with ${step.label}`, share: i / count })
    plans.push(await compute.run('variant', { request, variant: step.variant, index, base }, signal))
  }
  const step = before.length === 0 ? 'Planning the variant' : `Planning with ${steps[steps.length - 1].label}`
  tell({ step, share: before.length / count })
  const last = await compute.run('variant', { request, variant, index, base }, signal)
  return variantAnswerOf(variant, base, last, plans)
}
