import type { Course } from './course.ts'
import type { DayRules, Standing, StageRule, StopRule } from './day-rules.ts'

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
  /** When the array stands lifted inside the span; equal when it does not. */
  liftedFromMs: number
  liftedToMs: number
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
 * its length and not beyond the end of the driving hours (the rest is stood the next morning), a stage
 * that the clock cuts off ends where the car stands. An array is lifted inside a stop or a charging
 * window once it has been raised and until it must be lowered.
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
  const spans: Span[] = []
  let { stage, placeM, stopLeftS } = context.standing
  const late: Timetable['late'] = []
  parkedSpans(spans, day, { fromMs: day.opensMs, toMs: day.drivingFromMs, placeM, kind: 'morning-charge' })
  let nowMs = day.drivingFromMs

  const stand = (rule: StopRule, atStage: number, wantedS: number): void => {
    const toMs = Math.min(nowMs + wantedS * 1000, day.drivingToMs)
    pushStop(spans, rule, { stage: atStage, fromMs: nowMs, toMs, placeM })
    stopLeftS = Math.max(wantedS - (toMs - nowMs) / 1000, 0)
    nowMs = toMs
  }

  if (stopLeftS > 0) {
    const rule = stages[stage - 1].stop as StopRule
    stand(rule, stage - 1, stopLeftS)
  }
  while (stopLeftS === 0 && stage <= day.lastStage && nowMs < day.drivingToMs) {
    const leg = drive(course, stage, { placeM, nowMs, untilMs: day.drivingToMs, pieceS: context.pieceS })
    if (leg.toMs > nowMs)
      spans.push({ kind: 'drive', stage, fromMs: nowMs, toMs: leg.toMs, fromM: placeM, toM: leg.placeM, ...FLAT })
    placeM = leg.placeM
    nowMs = leg.toMs
    if (!leg.isFinished) break
    const rule = stages[stage].stop
    if (rule !== null) {
      const closesMs = rule.closesMs[context.dayIndex]
      if (nowMs > closesMs) late.push({ stage, byS: (nowMs - closesMs) / 1000, atMs: nowMs })
      stand(rule, stage, stopS(rule, nowMs, rule.opensMs[context.dayIndex]))
    }
    stage++
  }
  const isCutOff = stage <= day.lastStage || stopLeftS > 0
  parkedSpans(spans, day, { fromMs: nowMs, toMs: day.closesMs, placeM, kind: 'evening-charge' })
  return { spans, evening: { stage, placeM, stopLeftS }, late, isCutOff }
}

const FLAT = { liftedFromMs: 0, liftedToMs: 0 }

/** Seconds from arrival to departure. An early car never leaves before the stop opens. */
function stopS(rule: StopRule, arrivalMs: number, opensMs: number): number {
  const earlyS = Number.isNaN(opensMs) ? 0 : Math.max((opensMs - arrivalMs) / 1000, 0)
  return rule.runsFromOpening ? earlyS + rule.lengthS : Math.max(rule.lengthS, earlyS)
}

function pushStop(
  spans: Span[],
  rule: StopRule,
  at: { stage: number; fromMs: number; toMs: number; placeM: number },
): void {
  if (at.toMs <= at.fromMs) return
  const lifted = rule.lifts ? liftedBetween(at.fromMs, at.toMs, rule.raiseS, rule.lowerS) : FLAT
  const { stage, fromMs, toMs, placeM } = at
  spans.push({ kind: 'stop', stage, fromMs, toMs, fromM: placeM, toM: placeM, ...lifted })
}

function liftedBetween(fromMs: number, toMs: number, raiseS: number, lowerS: number) {
  const liftedFromMs = fromMs + raiseS * 1000
  const liftedToMs = toMs - lowerS * 1000
  return liftedToMs > liftedFromMs ? { liftedFromMs, liftedToMs } : FLAT
}

/** Drives the rest of a stage, piece by piece, until its end, the end of the hours, or a place it cannot pass. */
function drive(
  course: Course,
  stage: number,
  from: { placeM: number; nowMs: number; untilMs: number; pieceS: Float64Array },
): { placeM: number; toMs: number; isFinished: boolean } {
  const { firstPiece, endPiece, toM } = course.stages[stage]
  const { fromM, lengthM } = course.pieces
  let { placeM, nowMs } = from
  for (let i = pieceAt(course, placeM, firstPiece); i < endPiece; i++) {
    const endM = i + 1 < endPiece ? fromM[i + 1] : toM
    const leftS = ((endM - placeM) / lengthM[i]) * from.pieceS[i]
    if (!Number.isFinite(leftS)) return { placeM, toMs: nowMs, isFinished: false }
    const spareS = (from.untilMs - nowMs) / 1000
    if (leftS > spareS)
      return { placeM: placeM + (endM - placeM) * (spareS / leftS), toMs: from.untilMs, isFinished: false }
    placeM = endM
    nowMs += leftS * 1000
  }
  return { placeM: toM, toMs: nowMs, isFinished: true }
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

/** A parked stretch of the day, split into charging windows and the time between them. */
function parkedSpans(
  spans: Span[],
  day: DayRules,
  at: { fromMs: number; toMs: number; placeM: number; kind: SpanKind },
): void {
  let nowMs = at.fromMs
  const push = (kind: SpanKind, toMs: number, lifts: boolean): void => {
    if (toMs <= nowMs) return
    const lifted = lifts ? liftedBetween(nowMs, toMs, day.raiseS, day.lowerS) : FLAT
    spans.push({ kind, stage: -1, fromMs: nowMs, toMs, fromM: at.placeM, toM: at.placeM, ...lifted })
    nowMs = toMs
  }
  for (const window of day.charging) {
    const fromMs = Math.max(window.fromMs, nowMs)
    const toMs = Math.min(window.toMs, at.toMs)
    if (toMs <= fromMs) continue
    push('parked', fromMs, false)
    push(at.kind, toMs, window.lifts)
  }
  push('parked', at.toMs, false)
}
