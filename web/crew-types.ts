import type { BudgetDocument } from '../server/documents/budget.ts'
import type { CampDocument } from '../server/documents/here.ts'
import type { JudgementDocument } from '../server/documents/judgement.ts'
import type { PointingDocument } from '../server/documents/pointing.ts'
import type { SpeedsInput } from '../server/documents/speeds.ts'
import type { TrackerDayDocument } from '../server/documents/tracker-day.ts'
import type { TrackerReport } from '../server/documents/tracker-report.ts'

export type { ReadingDocument, ReadingField } from '../server/documents/reading.ts'
export type { KeptReading, TrackerReport } from '../server/documents/tracker-report.ts'

export type Verdict = JudgementDocument['verdict']
export type Curve = TrackerReport['bench']
export type TrackerDay = NonNullable<TrackerReport['day']>
/** A day of all trackers driven again, one of them in it, and a part of the day. */
export type TrackerDayWork = TrackerDayDocument
export type TrackerWork = TrackerDayDocument['trackers'][number]
export type PartOfDay = TrackerWork['parts'][number]

/** What a day's budget moved by. */
export interface Moved {
  date: string
  /** Points of efficiency by tracker. */
  pointsPct: Record<string, number>
  closingWhBefore: number
  closingWhAfter: number
  movedWh: number
}

/** One entry of the history: what moved a day’s budget, and where to. */
export interface Move {
  date: string
  cause: 'reading' | 'set-aside' | 'take-back' | 'use-bench' | 'use-learned' | 'choice' | 'engine'
  readingId: string | null
  closingWhBefore: number | null
  closingWhAfter: number | null
  movedAt: string
}

export interface ReadingAnswer extends JudgementDocument {
  id: string
  moved: Moved[]
}

export interface Trackers {
  uses: 'learned' | 'bench'
  items: TrackerReport[]
  /** The followed day driven again; null where none is followed. */
  work: TrackerDayWork | null
  /** Set where that day is tried, not followed. */
  isTried?: boolean
}

/** The budget that the crew follows, as somebody chose it. */
export interface FollowedChoice {
  carId: string
  skyId: string
  speeds: SpeedsInput
  /** Where the car is parked before the day's road ends. */
  until: CampDocument | null
  version: number
  savedAt: string
}

export interface FollowedBudget {
  forecastId: string
  madeAt: string
  choice: FollowedChoice
  budget: BudgetDocument
  learned: boolean
}

/** Where to point the array on a day, by the budget that the crew follows. */
export interface FollowedPointing {
  forecastId: string
  madeAt: string
  pointing: PointingDocument
}

export interface Share {
  id: string
  name: string
  createdAt: string
  isRevoked: boolean
}

/** A share just made: its address is told once. */
export interface NewShare extends Share {
  url: string
}

/** What a share link opens. */
export interface SharedBudget {
  name: string
  race: string
  date: string
  madeAt: string
  learned: boolean
  budget: BudgetDocument
}
