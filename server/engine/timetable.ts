import type { Course } from './course.ts'
import type { ChargingWindow, DayRules, Standing, StageRule, StopRule } from './day-rules.ts'
import { CRAWL_MPS } from './driven-road.ts'
import type { DrivenRoad } from './driven-road.ts'
import type { Horizon } from './horizon.ts'
import { driveLeg } from './leg.ts'
import { newMoves } from './moves.ts'
import type { Moves } from './moves.ts'

export type SpanKind = 'parked' | 'morning-charge' | 'drive' | 'stop' | 'evening-charge'

/** A part of the day with one activity. */
export interface Span {
  kind: SpanKind
  /** Stage that is driven, or at whose finish the car stops; -1 in the morning and in the evening. */
  stage: number
  fromMs: number
  toMs: number
  fromM: number
  toM: number
  /** Piece of road on which the car stands, or on which it sets off. */
  piece: number
  /** When the array stands lifted inside the span; equal when it does not. */
  liftedFromMs: number
  liftedToMs: number
  /** What stands around the car; left out, nothing. */
  horizon?: Horizon
  /** A drive's part of the day's moves; equal where the car stands. */
  firstMove: number
  endMove: number
}

/** One day laid out: what happens when, and where the car stands in the evening. */
export interface Timetable {
  spans: Span[]
  /** What the car does from place to place while it drives. */
  moves: Moves
  evening: Standing
  /** Arrivals after a stop had closed. */
  late: { stage: number; byS: number; atMs: number }[]
  /** Arrivals before a stop opened. */
  early: { stage: number; byS: number; atMs: number }[]
  /** Whether the clock, not the road, ended the driving. */
  isCutOff: boolean
  /** Whether it leaves road of the day; a stop at its end may go on the next morning. */
  isRoadLeft: boolean
}

/**
 * The day as a list of spans without gaps: morning, legs, stops, evening.
 *
 * Given the speeds held on the road, driving starts with the driving hours, from rest to rest, a stop lasts
 * its length and not beyond the end of the driving hours (the rest is stood the next morning; waiting for
 * an opening is not), a stage that the clock cuts off ends where the car stands. An array is lifted inside
 * a stop or a charging window once it has been raised and until it must be lowered.
 *
 * @param stages   their names and stops
 * @param day      hours of this day; `dayIndex` picks the stops' opening hours
 * @param standing where the car stands when the day opens
 * @param road     the course at the speeds to be driven
 */
export function timetable(
  road: DrivenRoad,
  stages: StageRule[],
  day: DayRules,
  context: { dayIndex: number; standing: Standing },
): Timetable {
  const { standing, dayIndex } = context
  const { course } = road
  const moves = newMoves()
  const spans: Span[] = []
  const late: Timetable['late'] = []
  const early: Timetable['early'] = []
  const now: Now = { ...standing, nowMs: day.opensMs, piece: standingPiece(course, standing) }
  park(spans, day, now, { untilMs: day.drivingFromMs, kind: 'morning-charge' })
  now.nowMs = day.drivingFromMs
  if (now.stopLeftS > 0) stand(spans, day, stages[now.stage - 1].stop, now, { waitS: 0, lengthS: now.stopLeftS })
  while (now.stopLeftS === 0 && now.stage <= day.lastStage && now.nowMs < day.drivingToMs) {
    if (!drive(spans, moves, road, day, now)) break
    const { stop } = stages[now.stage]
    const { nowMs: atMs } = now
    const closesMs = stop?.closesMs[dayIndex] ?? Number.NaN
    const opensMs = stop?.opensMs[dayIndex] ?? Number.NaN
    if (atMs > closesMs) late.push({ stage: now.stage, byS: (atMs - closesMs) / 1000, atMs })
    if (atMs < opensMs) early.push({ stage: now.stage, byS: (opensMs - atMs) / 1000, atMs })
    now.stage++
    if (stop !== null) stand(spans, day, stop, now, stopS(stop, now.nowMs, stop.opensMs[dayIndex]))
  }
  const { stage, placeM, stopLeftS } = now
  park(spans, day, now, { untilMs: day.closesMs, kind: 'evening-charge' })
  return {
    spans,
    moves,
    evening: { stage, placeM, stopLeftS },
    late,
    early,
    isCutOff: stage <= day.lastStage || stopLeftS > 0,
    isRoadLeft: stage <= day.lastStage,
  }
}

/** Where the car is while the day is laid out. */
interface Now extends Standing {
  nowMs: number
  piece: number
}

/** A car between two stages, whose roads need not meet, sets off from the next; in a stop it stands on the last. */
function standingPiece(course: Course, { placeM, stopLeftS }: Standing): number {
  const piece = pieceAt(course, placeM)
  return stopLeftS > 0 && piece > 0 && course.pieces.fromM[piece] >= placeM ? piece - 1 : piece
}

const FLAT = { liftedFromMs: 0, liftedToMs: 0 }
const STILL = { firstMove: 0, endMove: 0 }

/** From arrival to departure: waiting, then the length. An early car never leaves before the stop opens. */
function stopS(rule: StopRule, arrivalMs: number, opensMs: number): { waitS: number; lengthS: number } {
  const earlyS = Number.isNaN(opensMs) ? 0 : Math.max((opensMs - arrivalMs) / 1000, 0)
  if (rule.runsFromOpening) return { waitS: earlyS, lengthS: rule.lengthS }
  return { waitS: Math.max(earlyS - rule.lengthS, 0), lengthS: rule.lengthS }
}

/** Stands in the stop before the stage to be driven next, to its end or the end of the driving hours. */
function stand(
  spans: Span[],
  day: DayRules,
  rule: StopRule | null,
  now: Now,
  { waitS, lengthS }: { waitS: number; lengthS: number },
): void {
  if (rule === null) return
  const { placeM, piece, nowMs: fromMs } = now
  const endMs = fromMs + (waitS + lengthS) * 1000
  const toMs = Math.min(endMs, day.drivingToMs)
  // Waiting on arrival follows the length, waiting for the clock to start goes before it: either way it does not carry over.
  const leftS = rule.runsFromOpening ? (endMs - toMs) / 1000 : lengthS - (toMs - fromMs) / 1000
  now.stopLeftS = endMs > toMs ? Math.min(Math.max(leftS, 0), lengthS) : 0
  now.nowMs = toMs
  if (toMs <= fromMs) return
  const lifted = rule.lifts ? liftedBetween(fromMs, toMs, rule.raiseS, rule.lowerS) : FLAT
  const at = { fromMs, toMs, fromM: placeM, toM: placeM, piece, horizon: rule.horizon }
  spans.push({ kind: 'stop', stage: now.stage - 1, ...at, ...lifted, ...STILL })
}

function liftedBetween(fromMs: number, toMs: number, raiseS: number, lowerS: number) {
  const liftedFromMs = fromMs + raiseS * 1000
  const liftedToMs = toMs - lowerS * 1000
  return liftedToMs > liftedFromMs ? { liftedFromMs, liftedToMs } : FLAT
}

/** With less than this left of the hours the car does not set off. [MS] */
const LEAST_DRIVE_MS = 1000

/** Drives the rest of the stage, up to a piece that the motor cannot climb. @returns whether its end was reached */
function drive(spans: Span[], moves: Moves, road: DrivenRoad, day: DayRules, now: Now): boolean {
  const { placeM: fromM, nowMs: fromMs, stage } = now
  const { firstPiece, toM } = road.course.stages[stage]
  const piece = pieceAt(road.course, fromM, firstPiece)
  const endM = Math.max(Math.min(blockedFromM(road, piece, stage), toM), fromM)
  const spareMs = day.drivingToMs - fromMs
  if (endM <= fromM || spareMs < LEAST_DRIVE_MS) return endM >= toM && endM <= fromM
  const firstMove = moves.count
  const { speedMps } = now
  now.speedMps = 0
  const leg = driveLeg(road, { fromM, toM: endM, piece, withinS: spareMs / 1000, speedMps }, moves)
  if (moves.count === firstMove) return false
  now.placeM = leg.reachedM
  now.nowMs = leg.reachedM < endM ? day.drivingToMs : Math.min(fromMs + leg.durationS * 1000, day.drivingToMs)
  now.piece = moves.piece[moves.count - 1]
  const ends = { fromMs, toMs: now.nowMs, fromM, toM: now.placeM }
  spans.push({ kind: 'drive', stage, ...ends, piece, ...FLAT, firstMove, endMove: moves.count })
  return leg.reachedM >= toM
}

/** Where the first piece of a stage begins that the motor cannot climb; Infinity where there is none. */
function blockedFromM({ course, heldMps }: DrivenRoad, first: number, stage: number): number {
  const { endPiece } = course.stages[stage]
  for (let i = first; i < endPiece; i++) if (heldMps[i] < CRAWL_MPS) return course.pieces.fromM[i]
  return Infinity
}

/** Index of the piece that holds a place, looking from `first` on. */
export function pieceAt(course: Course, placeM: number, first = 0): number {
  const { fromM, count } = course.pieces
  let low = first
  let high = count - 1
  while (low < high) {
    const middle = (low + high + 1) >> 1
    if (fromM[middle] <= placeM) low = middle
    else high = middle - 1
  }
  return low
}

/** How a car is parked: in a charging window, or between them. */
type Parking = Pick<ChargingWindow, 'lifts' | 'horizon' | 'raiseS'> & { fromMs?: number }

const FLAT_UNDER_OPEN_SKY = { lifts: false }

/** The car stands still until an instant: charging windows and the time between them. */
function park(spans: Span[], day: DayRules, now: Now, until: { untilMs: number; kind: SpanKind }): void {
  const { placeM, piece } = now
  const push = (kind: SpanKind, toMs: number, { lifts, horizon, ...window }: Parking): void => {
    const fromMs = now.nowMs
    if (toMs <= fromMs) return
    const raiseS = fromMs === window.fromMs ? (window.raiseS ?? day.raiseS) : day.raiseS
    const lifted = lifts ? liftedBetween(fromMs, toMs, raiseS, day.lowerS) : FLAT
    spans.push({ kind, stage: -1, fromMs, toMs, fromM: placeM, toM: placeM, piece, horizon, ...lifted, ...STILL })
    now.nowMs = toMs
  }
  for (const window of day.charging) {
    const fromMs = Math.max(window.fromMs, now.nowMs)
    const toMs = Math.min(window.toMs, until.untilMs)
    if (toMs <= fromMs) continue
    push('parked', fromMs, FLAT_UNDER_OPEN_SKY)
    push(until.kind, toMs, window)
  }
  push('parked', until.untilMs, FLAT_UNDER_OPEN_SKY)
}
