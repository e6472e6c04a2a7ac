import type { Course } from './course.ts'
import type { DayRules, Standing, StageRule, StopRule } from './day-rules.ts'
import type { Horizon } from './horizon.ts'

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
}

/** One day laid out: what happens when, and where the car stands in the evening. */
export interface Timetable {
  spans: Span[]
  evening: Standing
  /** Arrivals after a stop had closed. */
  late: { stage: number; byS: number; atMs: number }[]
  /** Whether the clock, not the road, ended the driving. */
  isCutOff: boolean
}

/**
 * The day as a list of spans without gaps: morning, legs, stops, evening.
 *
 * Given the time that each piece of road takes, driving starts with the driving hours, a stop lasts
 * its length and not beyond the end of the driving hours (the rest is stood the next morning; waiting for
 * an opening is not), a stage that the clock cuts off ends where the car stands. An array is lifted inside
 * a stop or a charging window once it has been raised and until it must be lowered.
 *
 * @param course   roads of all stages
 * @param stages   their names and stops
 * @param day      hours of this day; `dayIndex` picks the stops' opening hours
 * @param standing where the car stands when the day opens
 * @param pieceS   time that each piece takes at the speeds to be driven; Infinity where the car cannot pass. [S]
 */
export function timetable(
  course: Course,
  stages: StageRule[],
  day: DayRules,
  context: { dayIndex: number; standing: Standing; pieceS: Float64Array },
): Timetable {
  const { standing, dayIndex, pieceS } = context
  const spans: Span[] = []
  const late: Timetable['late'] = []
  const now: Now = { ...standing, nowMs: day.opensMs, piece: standingPiece(course, standing) }
  park(spans, day, now, { untilMs: day.drivingFromMs, kind: 'morning-charge' })
  now.nowMs = day.drivingFromMs
  if (now.stopLeftS > 0) stand(spans, day, stages[now.stage - 1].stop, now, { waitS: 0, lengthS: now.stopLeftS })
  while (now.stopLeftS === 0 && now.stage <= day.lastStage && now.nowMs < day.drivingToMs) {
    if (!drive(spans, course, day, now, pieceS)) break
    const { stop } = stages[now.stage]
    const closesMs = stop?.closesMs[dayIndex] ?? Number.NaN
    if (now.nowMs > closesMs) late.push({ stage: now.stage, byS: (now.nowMs - closesMs) / 1000, atMs: now.nowMs })
    now.stage++
    if (stop !== null) stand(spans, day, stop, now, stopS(stop, now.nowMs, stop.opensMs[dayIndex]))
  }
  const { stage, placeM, stopLeftS } = now
  park(spans, day, now, { untilMs: day.closesMs, kind: 'evening-charge' })
  return { spans, evening: { stage, placeM, stopLeftS }, late, isCutOff: stage <= day.lastStage || stopLeftS > 0 }
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
  spans.push({ kind: 'stop', stage: now.stage - 1, ...at, ...lifted })
}

function liftedBetween(fromMs: number, toMs: number, raiseS: number, lowerS: number) {
  const liftedFromMs = fromMs + raiseS * 1000
  const liftedToMs = toMs - lowerS * 1000
  return liftedToMs > liftedFromMs ? { liftedFromMs, liftedToMs } : FLAT
}

/** Nearer than this to the end of the hours counts as at it, so that no step is too short to reckon with. [MS] */
const ONE_MOMENT_MS = 1

/** Drives the rest of the stage. @returns whether its end was reached */
function drive(spans: Span[], course: Course, day: DayRules, now: Now, pieceS: Float64Array): boolean {
  const { placeM: fromM, nowMs: fromMs, stage } = now
  const piece = pieceAt(course, fromM, course.stages[stage].firstPiece)
  const isFinished = pieceByPiece(course, now, piece, { untilMs: day.drivingToMs, pieceS })
  if (now.nowMs <= fromMs) return isFinished
  spans.push({ kind: 'drive', stage, fromMs, toMs: now.nowMs, fromM, toM: now.placeM, piece, ...FLAT })
  return isFinished
}

/** Moves the car until the end of its stage, the end of the hours, or a place it cannot pass. */
function pieceByPiece(
  course: Course,
  now: Now,
  first: number,
  limit: { untilMs: number; pieceS: Float64Array },
): boolean {
  const { endPiece, toM } = course.stages[now.stage]
  const { fromM, lengthM } = course.pieces
  for (let i = first; i < endPiece; i++) {
    const endM = i + 1 < endPiece ? fromM[i + 1] : toM
    const leftMs = ((endM - now.placeM) / lengthM[i]) * limit.pieceS[i] * 1000
    const spareMs = limit.untilMs - now.nowMs
    if (!Number.isFinite(leftMs) || spareMs < ONE_MOMENT_MS) return false
    now.piece = i
    if (leftMs > spareMs + ONE_MOMENT_MS) {
      now.placeM += (endM - now.placeM) * (spareMs / leftMs)
      now.nowMs = limit.untilMs
      return false
    }
    now.placeM = endM
    now.nowMs = Math.min(now.nowMs + leftMs, limit.untilMs)
  }
  return true
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

const FLAT_UNDER_OPEN_SKY = { lifts: false }

/** The car stands still until an instant: charging windows and the time between them. */
function park(spans: Span[], day: DayRules, now: Now, until: { untilMs: number; kind: SpanKind }): void {
  const { placeM, piece } = now
  const push = (kind: SpanKind, toMs: number, { lifts, horizon }: { lifts: boolean; horizon?: Horizon }): void => {
    const fromMs = now.nowMs
    if (toMs <= fromMs) return
    const lifted = lifts ? liftedBetween(fromMs, toMs, day.raiseS, day.lowerS) : FLAT
    spans.push({ kind, stage: -1, fromMs, toMs, fromM: placeM, toM: placeM, piece, horizon, ...lifted })
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
