import { type Answer, ask, BASE, itemsOf, json } from './api.ts'
import type { PlanAnswer, PlanEntry } from './plan-types.ts'

/** What a plan is ordered with. */
export interface PlanOrder {
  race: string
  carId: string
  skyId: string
  date: string
  targetPct?: number
  promisePct: number
}

export const orderPlan = ({ race, ...wanted }: PlanOrder): Promise<Answer<PlanAnswer>> =>
  ask(`${BASE}/races/${race}/plans`, { method: 'POST', ...json(wanted) })

export const planOf = (id: string): Promise<Answer<PlanAnswer>> => ask(`${BASE}/plans/${id}`)

/** The race's last plans, newest first, without their bodies. */
export const plansOf = (race: string): Promise<Answer<PlanEntry[]>> => itemsOf(`${BASE}/races/${race}/plans`)

export const cancelPlan = (id: string): Promise<Answer<PlanAnswer>> => ask(`${BASE}/plans/${id}`, { method: 'DELETE' })
