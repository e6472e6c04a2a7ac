import { type Answer, ask, BASE, itemsOf, json } from './api.ts'
import type { KeptVariant, VariantInput } from './variant-types.ts'

/** Orders one variant beside a plan; one that is there already comes at once. */
export async function orderVariant(planId: string, variant: VariantInput): Promise<Answer<KeptVariant>> {
  const init = { method: 'POST', ...json({ variants: [variant] }) }
  const answer = await ask<{ items: KeptVariant[] }>(`${BASE}/plans/${planId}/variants`, init)
  return answer.value === undefined ? answer : { value: answer.value.items[0] }
}

/** A plan's last variants, newest first. */
export const variantsOf = (planId: string): Promise<Answer<KeptVariant[]>> =>
  itemsOf(`${BASE}/plans/${planId}/variants`)

export const cancelVariant = (id: string): Promise<Answer<KeptVariant>> =>
  ask(`${BASE}/variants/${id}`, { method: 'DELETE' })
