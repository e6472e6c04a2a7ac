import { z } from 'zod'
import { type PlanDocument, planDocument } from './plan.ts'

/** What a list of plans tells of each: enough to lay them side by side. */
export const planGist = z.strictObject({
  outcome: planDocument.shape.outcome.shape.kind,
  targetPct: z.number().describe('charge wanted at the close [% of charge]'),
  arriveAt: z.string().nullable().describe('arrival at the speeds for people (ISO 8601, local offset)'),
  closingWh: z.number().nullable().describe('battery at the close at these speeds [Wh]'),
  closingPct: z.number().nullable().describe('the same as charge [% of charge]'),
  touchesReservePct: z.number().nullable().describe('members that touch the reserve on the road [%]'),
})

export type PlanGist = z.output<typeof planGist>

/** A plan in short; figures of a day that is not planned are null. */
export const gistOf = ({ outcome, target, forPeople, ranges }: PlanDocument): PlanGist => ({
  outcome: outcome.kind,
  targetPct: target.chargePct,
  arriveAt: forPeople?.arriveAt ?? null,
  closingWh: forPeople?.closingWh ?? null,
  closingPct: forPeople?.closingPct ?? null,
  touchesReservePct: ranges?.touchesReservePct ?? null,
})
