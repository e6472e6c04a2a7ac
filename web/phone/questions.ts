import type { ForecastRequest } from '../../server/documents/forecast.ts'
import type { HereDocument } from '../../server/documents/here.ts'
import type { Problem } from '../../server/documents/problem.ts'
import type { ChangeDocument } from '../../server/documents/what-if.ts'

/** What a race's days are worked out from, as the service hands it out. */
export type RaceDocuments = Pick<ForecastRequest, 'car' | 'race' | 'sky' | 'routes' | 'learned'>

/** Documents with the name of just these versions of them. */
export interface Kept {
  edition: string
  /** When the service said last that they hold. [ms since 1970, UTC] */
  keptAtMs: number
  documents: RaceDocuments
}

/** A day, from where the car is or whole. */
export interface DayQuestion {
  date: string
  from?: HereDocument
  /** Charge wanted at the close; left out: the race's. [% of charge] */
  targetPct?: number
}

export interface Variant {
  name: string
  change: ChangeDocument
}

/** What a phone's worker can be asked, each as the service takes it, without its documents. */
export type Question =
  | { kind: 'plan'; asked: DayQuestion }
  | { kind: 'what-if'; asked: DayQuestion & { variants: Variant[] } }

/** What the page tells the worker: documents, then questions on them. */
export type Told =
  | { kind: 'documents'; documents: RaceDocuments }
  | { kind: 'question'; id: number; question: Question }

/** What became of a question; `text` is the answer as JSON, letter for letter the service's. */
export type Outcome = { kind: 'answer'; text: string } | { kind: 'refused'; detail: string; errors: Problem[] }

/** How far a long answer is, in words and as a share of 0..1. */
export interface Progress {
  step: string
  share: number
}

/** What the worker tells the page. */
export type Reply = { id: number } & ({ kind: 'progress'; progress: Progress } | { kind: 'outcome'; outcome: Outcome })
