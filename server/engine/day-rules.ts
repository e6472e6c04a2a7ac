import type { Horizon } from './horizon.ts'

/** The timed stop at the end of a stage. Instants are given for every day of the race, NaN where there is none. */
export interface StopRule {
  name: string
  lengthS: number
  /** For a car that comes early: the length runs from the opening rather than from the arrival. */
  runsFromOpening: boolean
  lifts: boolean
  raiseS: number
  lowerS: number
  opensMs: Float64Array
  closesMs: Float64Array
  /** What stands around the car there; left out, nothing. */
  horizon?: Horizon
}

/** A stage as the timetable needs it. */
export interface StageRule {
  name: string
  start: string
  finish: string
  stop: StopRule | null
}

export interface ChargingWindow {
  fromMs: number
  toMs: number
  lifts: boolean
  /** What stands around the car then; left out, nothing. */
  horizon?: Horizon
  /** For a car that stands in it from its start: time to lift the array; left out, the day's. [S] */
  raiseS?: number
}

/** The hours of one day. */
export interface DayRules {
  opensMs: number
  closesMs: number
  drivingFromMs: number
  drivingToMs: number
  /** Ascending, not overlapping, inside the day. */
  charging: ChargingWindow[]
  raiseS: number
  lowerS: number
  /** The last stage that may be driven by the end of this day; -1 before the first. Stages run in their order. */
  lastStage: number
}

/** Where the car stands between two days. */
export interface Standing {
  /** The stage it is on, or the one it will drive next. */
  stage: number
  /** Place from the start of the race. [M] */
  placeM: number
  /** What is left of a stop that the end of the day cut in two. [S] */
  stopLeftS: number
  /** How fast it is as the driving hours begin, where they begin on the road; left out, at rest. [Mps] */
  speedMps?: number
}
