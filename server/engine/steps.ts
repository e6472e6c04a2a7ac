import type { Course } from './course.ts'
import type { Moves } from './moves.ts'
import type { Span, Timetable } from './timetable.ts'

/** Longest step of a parked car. [S] */
export const PARKED_STEP_S = 60

/** The day cut into steps with one pose and one acceleration; every array has `count` entries. */
export interface Steps {
  count: number
  fromMs: Float64Array
  toMs: Float64Array
  /** Middle of the step, at which sun and weather are taken. */
  atMs: Float64Array
  /** Place at its start and its end, from the start of the race. [M] */
  fromM: Float64Array
  toM: Float64Array
  latRad: Float64Array
  lonRad: Float64Array
  altM: Float64Array
  headingRad: Float64Array
  gradeRad: Float64Array
  /** Mean of the speeds at both ends, 0 when parked. */
  speedMps: Float64Array
  fromMps: Float64Array
  toMps: Float64Array
  /** 1 where the array stands lifted. */
  lifted: Uint8Array
  /** 1 where the trackers may take what the strings give. */
  charging: Uint8Array
  span: Int32Array
  piece: Int32Array
}

const FLOATS = [
  'fromMs',
  'toMs',
  'atMs',
  'fromM',
  'toM',
  'latRad',
  'lonRad',
  'altM',
  'headingRad',
  'gradeRad',
  'speedMps',
  'fromMps',
  'toMps',
] as const

/**
 * The spans of a day cut into steps: one per move while driving, at most one minute when parked.
 *
 * @param course  roads of all stages
 * @param table   the day's timetable
 * @param reaimS  time that a pose of the lifted array is held: no step reaches over its end. [S]
 */
export function steps(course: Course, { spans, moves }: Pick<Timetable, 'spans' | 'moves'>, reaimS = 0): Steps {
  const out = emptySteps(spans.reduce((sum, span) => sum + stepsIn(span, reaimS), 0))
  spans.forEach((span, index) => {
    if (span.kind === 'drive') driveSteps(out, course, { span, index, moves })
    else parkedSteps(out, course, span, { index, reaimS })
  })
  return out
}

/** Room for so many steps; every array is full of zeros. */
export function emptySteps(most: number): Steps {
  const floats = Object.fromEntries(FLOATS.map((name) => [name, new Float64Array(most)]))
  const marks = { lifted: new Uint8Array(most), charging: new Uint8Array(most) }
  return { count: 0, ...floats, ...marks, span: new Int32Array(most), piece: new Int32Array(most) } as unknown as Steps
}

/** Exact number of steps of a span, so that the arrays have no slack. */
const stepsIn = (span: Span, reaimS: number): number =>
  span.kind === 'drive' ? span.endMove - span.firstMove : parkedEdgesMs(span, reaimS).length - 1

function driveSteps(out: Steps, course: Course, leg: { span: Span; index: number; moves: Moves }): void {
  const { span, index, moves } = leg
  let nowMs = span.fromMs
  for (let m = span.firstMove; m < span.endMove; m++) {
    const toMs = m + 1 === span.endMove ? span.toMs : nowMs + moves.durationS[m] * 1000
    const place = { fromM: moves.fromM[m], toM: moves.toM[m], piece: moves.piece[m] }
    const i = push(out, course, { fromMs: nowMs, toMs, ...place, index })
    out.fromMps[i] = moves.fromMps[m]
    out.toMps[i] = moves.toMps[m]
    out.speedMps[i] = (moves.fromMps[m] + moves.toMps[m]) / 2
    out.charging[i] = 1
    nowMs = toMs
  }
}

/** Nearer than this to another mark a new pose makes no step of its own. [MS] */
const ONE_MOMENT_MS = 1

/** Edges of a parked span: where the array is raised, aimed anew and lowered, and even steps between. */
function parkedEdgesMs(span: Span, reaimS: number): number[] {
  const { fromMs, toMs, liftedFromMs, liftedToMs } = span
  const marks = [fromMs]
  if (liftedToMs > liftedFromMs) {
    marks.push(liftedFromMs)
    // Poses that last less than a step are those of the steps.
    if (reaimS >= PARKED_STEP_S)
      for (let ms = liftedFromMs + reaimS * 1000; ms < liftedToMs - ONE_MOMENT_MS; ms += reaimS * 1000) marks.push(ms)
    marks.push(liftedToMs)
  }
  marks.push(toMs)
  const edges = [marks[0]]
  for (let m = 1; m < marks.length; m++) {
    const lengthMs = marks[m] - marks[m - 1]
    const parts = Math.ceil(lengthMs / 1000 / PARKED_STEP_S)
    for (let i = 1; i <= parts; i++) edges.push(marks[m - 1] + (lengthMs * i) / parts)
  }
  return edges
}

function parkedSteps(out: Steps, course: Course, span: Span, of: { index: number; reaimS: number }): void {
  const { index, reaimS } = of
  const edges = parkedEdgesMs(span, reaimS)
  const { piece } = span
  const isAtEnd = span.fromM >= course.pieces.fromM[piece] + course.pieces.lengthM[piece] / 2
  for (let e = 1; e < edges.length; e++) {
    const i = push(out, course, {
      fromMs: edges[e - 1],
      toMs: edges[e],
      fromM: span.fromM,
      toM: span.fromM,
      piece,
      index,
    })
    out.altM[i] = isAtEnd ? course.pieces.endAltM[piece] : course.pieces.startAltM[piece]
    out.gradeRad[i] = 0
    out.charging[i] = span.kind === 'parked' ? 0 : 1
    out.lifted[i] = out.atMs[i] > span.liftedFromMs && out.atMs[i] < span.liftedToMs ? 1 : 0
  }
}

function push(
  out: Steps,
  course: Course,
  step: { fromMs: number; toMs: number; fromM: number; toM: number; piece: number; index: number },
): number {
  const i = out.count++
  const { pieces } = course
  out.fromMs[i] = step.fromMs
  out.toMs[i] = step.toMs
  out.atMs[i] = (step.fromMs + step.toMs) / 2
  out.fromM[i] = step.fromM
  out.toM[i] = step.toM
  out.latRad[i] = pieces.latRad[step.piece]
  out.lonRad[i] = pieces.lonRad[step.piece]
  out.altM[i] = pieces.altM[step.piece]
  out.headingRad[i] = pieces.headingRad[step.piece]
  out.gradeRad[i] = pieces.gradeRad[step.piece]
  out.span[i] = step.index
  out.piece[i] = step.piece
  return i
}
