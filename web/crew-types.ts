import type { BudgetDocument } from '../server/documents/budget.ts'
import type { SpeedsInput } from '../server/documents/speeds.ts'

/** The side of a tracker and the quantity that a figure was read at. */
export type ReadingField = 'inputV' | 'inputA' | 'outputV' | 'outputA'

/** Four figures read off a tracker, as the client sends them. */
export interface ReadingDocument extends Record<ReadingField, number> {
  id: string
  tracker: string
  at: string
  meters?: Partial<Record<ReadingField, string>>
  note?: string
}

export type Verdict = 'counts' | 'impossible' | 'at-limit' | 'pack-full' | 'far-off'

/** What a reading says against the tracker's curve. */
export interface Judgement {
  verdict: Verdict
  reason: string
  efficiencyPct: number
  /** Standard uncertainty from the meters. [points] */
  uncertaintyPct: number
  expectedPct: number
  bandPct: [number, number]
}

/** What a day's budget moved by. */
export interface Moved {
  date: string
  /** Points of efficiency by tracker. */
  pointsPct: Record<string, number>
  closingWhBefore: number
  closingWhAfter: number
  movedWh: number
}

export interface ReadingAnswer extends Judgement {
  id: string
  moved: Moved[]
}

export interface ReadingEntry extends Judgement {
  reading: ReadingDocument
  receivedAt: string
  isSetAside: boolean
}

/** A curve with its band along the input power; all of one length. [%] */
export interface Curve {
  efficiencyPct: number[]
  lowPct: number[]
  highPct: number[]
}

export interface TrackerTerm {
  name: string
  value: number
  sd: number
  unit: string
  isIdentified: boolean
}

export interface TrackerReport {
  name: string
  maxW: number
  /** Voltages that the curves are drawn at. */
  inputV: number
  outputV: number
  inputW: number[]
  bench: Curve
  learned: Curve
  terms: TrackerTerm[]
  readings: ReadingEntry[]
  /** From the budget that the crew follows; null where none is followed. */
  day: TrackerDay | null
}

export interface TrackerDay {
  date: string
  /** Energy at its input. */
  wh: number
  sharePct: number
  /** Time outside its window while there was sun. */
  outsideMin: number
  deniedWh: number
  meanEfficiencyPct: number
  /** Where the day's energy fell, by input power. */
  fell: { fromW: number; toW: number; wh: number }[]
  /** What one point of efficiency more would bring over the day. */
  onePointWh: number
}

export interface Trackers {
  uses: 'learned' | 'bench'
  items: TrackerReport[]
}

/** The budget that the crew follows, as somebody chose it. */
export interface FollowedChoice {
  carId: string
  skyId: string
  speeds: SpeedsInput
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
