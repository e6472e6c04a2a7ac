/** A value that changes piecewise linearly in time; before the first and after the last knot it stays. */
export interface Curve {
  atMs: Float64Array
  value: Float64Array
  slopePerMs: Float64Array
}

/**
 * One row of a table on its stretch of time: the value it stands for and how much the first knot, the middle and the
 * last knot of that stretch weigh in it. A row for one instant has fromMs === toMs and weighs nothing.
 */
export interface Span {
  fromMs: number
  midMs: number
  toMs: number
  value: number
  startWeight: number
  midWeight: number
  endWeight: number
}

/** Earliest instant a curve can be asked for, so that no search runs off its start: lowest time value. [ms] */
const BEGINNING_MS = -8.64e15

/** Curve through (instant, value); two knots at one instant make a step. */
export function curveThrough(knotMs: number[], knotValue: number[]): Curve {
  const atMs = Float64Array.of(BEGINNING_MS, ...knotMs)
  const value = Float64Array.of(knotValue[0], ...knotValue)
  const slopePerMs = new Float64Array(atMs.length)
  for (let k = 1; k + 1 < atMs.length; k++)
    if (atMs[k + 1] > atMs[k]) slopePerMs[k] = (value[k + 1] - value[k]) / (atMs[k + 1] - atMs[k])
  return { atMs, value, slopePerMs }
}

/** Fills `out` with the curve at each instant; fastest when the instants ascend. */
export function curveAlong(curve: Curve, instantsMs: Float64Array, out: Float64Array): Float64Array {
  const { atMs, value, slopePerMs } = curve
  const last = atMs.length - 1
  let k = 0
  for (let i = 0; i < out.length; i++) {
    const now = instantsMs[i]
    while (k > 0 && now < atMs[k]) k--
    while (k < last && now >= atMs[k + 1]) k++
    out[i] = value[k] + slopePerMs[k] * (now - atMs[k])
  }
  return out
}

/**
 * Curve whose weighted mean over every row's stretch is that row's value, exactly.
 *
 * Where two rows touch, the curve passes through their mean by weight; at an edge without a neighbour it takes the
 * row's own value. The middle knot is solved from the row's value. Where it would leave [low, high], both edges of
 * the row are drawn towards its value as far as needed, in the extreme to a constant; the curve then steps there.
 *
 * @param spans  ascending, not overlapping
 * @param low    least value allowed
 * @param high   greatest value allowed
 * @returns null when there is no row
 */
export function meanPreserving(spans: Span[], low: number, high: number): Curve | null {
  if (spans.length === 0) return null
  const atMs: number[] = []
  const value: number[] = []
  spans.forEach((span, i) => {
    const start = sharedEdge(spans[i - 1], span) ?? span.value
    const end = sharedEdge(span, spans[i + 1]) ?? span.value
    if (span.fromMs === span.toMs) {
      atMs.push(span.fromMs)
      value.push(span.value)
      return
    }
    const pull = (start - span.value) * span.startWeight + (end - span.value) * span.endWeight
    const deviation = span.midWeight > 0 ? -pull / span.midWeight : 0
    const keep = span.midWeight > 0 ? share(span.value, deviation, low, high) : 0
    atMs.push(span.fromMs, span.midMs, span.toMs)
    value.push(
      span.value + keep * (start - span.value),
      span.value + keep * deviation,
      span.value + keep * (end - span.value),
    )
  })
  return curveThrough(atMs, value)
}

/** Share of the edges' deviation that keeps the middle knot inside the limits. */
function share(rowValue: number, deviation: number, low: number, high: number): number {
  const middle = rowValue + deviation
  if (middle < low) return Math.max((low - rowValue) / deviation, 0)
  if (middle > high) return Math.max((high - rowValue) / deviation, 0)
  return 1
}

function sharedEdge(before: Span | undefined, after: Span | undefined): number | null {
  if (before === undefined || after === undefined || before.toMs !== after.fromMs) return null
  const left = before.startWeight + before.midWeight + before.endWeight
  const right = after.startWeight + after.midWeight + after.endWeight
  if (!(left + right > 0)) return null
  return (before.value * left + after.value * right) / (left + right)
}

/** Rows whose mean is a plain mean over time; rows that are NaN are left out and bridged. */
export function plainSpans(fromMs: Float64Array, toMs: Float64Array, values: Float64Array): Span[] {
  const spans: Span[] = []
  for (let row = 0; row < values.length; row++) {
    if (Number.isNaN(values[row])) continue
    const length = toMs[row] - fromMs[row]
    spans.push({
      fromMs: fromMs[row],
      midMs: fromMs[row] + length / 2,
      toMs: toMs[row],
      value: values[row],
      startWeight: length / 4,
      midWeight: length / 2,
      endWeight: length / 4,
    })
  }
  return spans
}
