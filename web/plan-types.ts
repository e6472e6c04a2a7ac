import type { PlanDocument } from '../server/documents/plan.ts'
import type { PlanGist } from '../server/documents/plan-gist.ts'

export type { PlanDocument } from '../server/documents/plan.ts'
export type { PlanGist } from '../server/documents/plan-gist.ts'

/** What a plan was asked to keep. */
export interface Wanted {
  /** Charge wanted at the close; left out: the race's. [% of charge] */
  targetPct?: number
  /** Share of the days drawn that a steady plan may touch the reserve on. [%] */
  promisePct: number
  objective?: 'earliest' | 'furthest'
  /** When the driving must end, in place of the day's hours. */
  byTime?: string
  /** Where the car is in the middle of the day, and where it is parked before its hours end. */
  from?: object
  until?: object
}

/** A plan without its body. */
export interface PlanEntry {
  id: string
  raceId: string
  date: string
  carId: string
  skyId: string
  wanted: Wanted
  engineVersion: string
  state: 'working' | 'done' | 'failed' | 'cancelled'
  fault: { code: string; detail: string } | null
  startedAt: string
  endedAt: string | null
  gist: PlanGist | null
}

export interface PlanAnswer extends PlanEntry {
  plan: PlanDocument | null
}

/** What the day's stream tells of a plan. */
export interface PlanNews {
  planId: string
  state: PlanEntry['state']
  step?: string
  /** 0..1 */
  share?: number
}

/** A plan of a day that drives. */
export type Planned = PlanDocument & {
  best: NonNullable<PlanDocument['best']>
  forPeople: NonNullable<PlanDocument['forPeople']>
}
