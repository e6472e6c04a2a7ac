import { scaleLinear } from 'd3-scale'
import { area, line } from 'd3-shape'
import type { Curve, TrackerDay } from '../crew-types.ts'

/** A reading on the chart. */
export interface Mark {
  inputW: number
  efficiencyPct: number
  uncertaintyPct: number
  counts: boolean
  text?: string
}

export interface CurveAxes {
  left: number
  right: number
  /** Where the curves end, and where the axis stands under what fell. [px] */
  base: number
  foot: number
  height: number
  x: (w: number) => number
  y: (pct: number) => number
  pctTicks: number[]
  wTicks: number[]
}

interface Room {
  width: number
  maxW: number
  curve: Curve
  marks: Mark[]
  hasFall: boolean
}

const PLOT_PX = 128
const FALL_PX = 46
const LEFT_PX = 34
const LEAST_PCT = 92
const TICK_ROOM = 52

/** Axes on which every reading can be seen; the curve’s steep start may leave the plot. */
export function curveAxes({ width, maxW, curve, marks, hasFall }: Room): CurveAxes {
  const shown = marks.map(({ efficiencyPct: pct, uncertaintyPct: u }) => [pct - 2 * u, pct + 2 * u])
  const peak = Math.max(...curve.lowPct)
  const from = Math.max(0, Math.min(LEAST_PCT, peak - 2, ...shown.map(([low]) => low)))
  const to = Math.min(140, Math.max(101, ...shown.map(([, high]) => high + 1)))
  const right = width - 4
  const most = Math.max(maxW, ...marks.map((mark) => mark.inputW)) * 1.03
  const x = scaleLinear().domain([0, most]).range([LEFT_PX, right])
  const y = scaleLinear().domain([from, to]).range([PLOT_PX, 0])
  const foot = hasFall ? PLOT_PX + FALL_PX : PLOT_PX
  const everyPct = [1, 2, 4, 5, 10, 20].find((step) => (PLOT_PX / (to - from)) * step >= 26) ?? 50
  const everyW = [20, 50, 100, 200, 500, 1000, 2000, 5000].find((step) => x(step) - x(0) >= TICK_ROOM) ?? 10_000
  return {
    left: LEFT_PX,
    right,
    base: PLOT_PX,
    foot,
    height: foot + 24,
    x,
    y,
    pctTicks: multiples(100, -everyPct, (pct) => pct >= from),
    wTicks: multiples(0, everyW, (w) => x(w) < right - 34),
  }
}

function multiples(start: number, step: number, isIn: (value: number) => boolean): number[] {
  const values = []
  for (let value = start; isIn(value); value += step) values.push(value)
  return values
}

export function curvePaths({ x, y }: CurveAxes, inputW: number[], curve: Curve) {
  const along = (column: number[]): string =>
    line<number>(
      (w) => x(w),
      (_, i) => y(column[i]),
    )(inputW) ?? ''
  const band = area<number>()
    .x((w) => x(w))
    .y0((_, i) => y(curve.lowPct[i]))
    .y1((_, i) => y(curve.highPct[i]))
  return {
    band: band(inputW) ?? '',
    low: along(curve.lowPct),
    high: along(curve.highPct),
    line: along(curve.efficiencyPct),
  }
}

/** Where the day’s energy fell: bins by input power, the tallest filling the room under the curve. */
export function fallPath({ x, base, foot }: CurveAxes, fell: TrackerDay['fell']): string {
  // By density, so that bins of unlike width compare by their area.
  const density = fell.map(({ fromW, toW, wh }) => wh / (toW - fromW))
  const most = Math.max(...density, 1e-9)
  const y = (value: number): number => foot - ((foot - base - 10) * value) / most
  const steps = fell.map(({ fromW, toW }, i) => `L${x(fromW)} ${y(density[i])}H${x(toW)}`).join('')
  return fell.length === 0 ? '' : `M${x(fell[0].fromW)} ${foot}${steps}V${foot}Z`
}
