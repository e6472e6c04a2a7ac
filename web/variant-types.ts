import type { z } from 'zod'
import type { variantDocument, VariantAnswer } from '../server/documents/variant.ts'
import type { PlanEntry } from './plan-types.ts'

export type { ArrivalCause, EnergyCause, VariantAnswer } from '../server/documents/variant.ts'

/** What a variant changes, as it is sent. */
export type VariantInput = z.input<typeof variantDocument>

/** A variant beside a plan, as the service keeps it. */
export interface KeptVariant {
  id: string
  planId: string
  name: string
  variant: VariantInput
  state: PlanEntry['state']
  fault: { code: string; detail: string } | null
  startedAt: string
  answer: VariantAnswer | null
}

/** What the day's stream tells of a variant. */
export interface VariantNews {
  variantId: string
  state: PlanEntry['state']
  step?: string
  /** 0..1 */
  share?: number
}
