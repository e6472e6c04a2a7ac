import { scaleLinear } from 'd3-scale'
import { curveStepAfter, line } from 'd3-shape'
import type { DayBudget } from '../../server/documents/budget.ts'
import type { Axis } from './axis.ts'

/** Heights of the band’s tracks from the top of the plot. [px] */
export const PLOT = { half: 102, full: 204, roadTop: 222, roadBase: 261, foot: 286 }

type Point = [number, number]

/** Mean power between two instants, from energies. */
export interface Bin {
  fromMs: number
  toMs: number
  inW: number
  outW: number
}

const BIN_MS = 10 * 60_000
const NEAR_MS = 4 * 60_000

const path = line()
const steps = line().curve(curveStepAfter)

/** Bins of ten minutes, cut where the car starts and stops, each the mean of its own energy. */
export function powerBins(day: DayBudget): Bin[] {
  const { fromMs, toMs, inW, outW } = day.series
  const cumIn = cumulative(inW, fromMs, toMs)
  const cumOut = cumulative(outW, fromMs, toMs)
  const edges = binEdges(day)
  return edges.slice(1).map((to, i) => {
    const from = edges[i]
    const mean = (cum: number[]): number => (energyAt(cum, day, to) - energyAt(cum, day, from)) / (to - from)
    return { fromMs: from, toMs: to, inW: mean(cumIn), outW: mean(cumOut) }
  })
}

const cumulative = (powerW: number[], fromMs: number[], toMs: number[]): number[] => {
  let sum = 0
  return powerW.map((w, i) => (sum += w * (toMs[i] - fromMs[i])))
}

function energyAt(cum: number[], day: DayBudget, atMs: number): number {
  const { fromMs, toMs } = day.series
  const i = stepAt(toMs, atMs)
  const before = i === 0 ? 0 : cum[i - 1]
  const share = (atMs - fromMs[i]) / Math.max(toMs[i] - fromMs[i], 1)
  return before + (cum[i] - before) * Math.min(1, Math.max(0, share))
}

/** The step that an instant falls in; ends belong to the step before them. */
export function stepAt(toMs: number[], atMs: number): number {
  let low = 0
  let high = toMs.length - 1
  while (low < high) {
    const middle = (low + high) >> 1
    if (toMs[middle] < atMs) low = middle + 1
    else high = middle
  }
  return low
}

function binEdges(day: DayBudget): number[] {
  const first = day.series.fromMs[0]
  const last = day.series.toMs[day.series.toMs.length - 1]
  const hard = [first, ...day.spans.map((span) => Date.parse(span.from)), last]
  const edges = new Set(hard.filter((at) => at >= first && at <= last))
  for (let at = Math.ceil(first / BIN_MS) * BIN_MS; at < last; at += BIN_MS)
    if (!hard.some((edge) => Math.abs(edge - at) < NEAR_MS)) edges.add(at)
  return [...edges].sort((a, b) => a - b)
}

/** Highest power of the bins, in or out: both share one scale. */
export const mostW = (bins: Bin[]): number => Math.max(100, ...bins.map((bin) => Math.max(bin.inW, bin.outW)))

/** Watts to pixels away from the zero line; the tallest bin ends before a usual reserve, which is no power limit. */
export const powerScale = (bins: Bin[]): ((w: number) => number) =>
  scaleLinear()
    .domain([0, mostW(bins)])
    .range([0, PLOT.half * 0.74])

/** Percent of charge to its height in the plot: 100 % at the top, 0 % at the bottom. */
export const chargeY = (top: number): ((pct: number) => number) =>
  scaleLinear()
    .domain([0, 100])
    .range([top + PLOT.full, top])

/** Outline of one side of the band: harvest above the zero line, spending below it. */
export function powerPath(bins: Bin[], axis: Axis, side: 'in' | 'out', zeroY: number): string {
  const height = powerScale(bins)
  const y = (bin: Bin): number => (side === 'in' ? zeroY - height(bin.inW) : zeroY + height(bin.outW))
  const points = bins.map((bin): Point => [round(axis.x(bin.fromMs)), round(y(bin))])
  return steps([[points[0][0], zeroY], ...points, [round(axis.x(bins[bins.length - 1].toMs)), zeroY]]) ?? ''
}

/** The battery from the day’s opening to its close. */
export function chargePath(day: DayBudget, axis: Axis, top: number): string {
  const y = chargeY(top)
  const points: Point[] = [[0, round(y(day.opening.chargePct))]]
  day.series.toMs.forEach((atMs, i) => points.push([round(axis.x(atMs)), round(y(day.series.chargePct[i]))]))
  return path(thinned(points)) ?? ''
}

/** Road height under the plot, with its highest point. */
export function roadHeight(day: DayBudget, axis: Axis, top: number): { line: string; area: string; peak: RoadPeak } {
  const { heightM, fromMs, toMs } = day.series
  const low = Math.min(...heightM)
  const high = Math.max(...heightM)
  const y = scaleLinear()
    .domain([low, Math.max(high, low + 50)])
    .range([top + PLOT.roadBase - 4, top + PLOT.roadTop + 2])
  const points = heightM.map((m, i): Point => [round(axis.x((fromMs[i] + toMs[i]) / 2)), round(y(m))])
  const whole: Point[] = [[0, points[0][1]], ...smoothed(points), [axis.width, points[points.length - 1][1]]]
  const at = heightM.indexOf(high)
  const base = top + PLOT.roadBase
  return {
    line: path(whole) ?? '',
    area: `${path(whole) ?? ''}L${axis.width},${base}L0,${base}Z`,
    peak: { x: points[at][0], y: points[at][1], m: high },
  }
}

export interface RoadPeak {
  x: number
  y: number
  m: number
}

const round = (value: number): number => Math.round(value * 10) / 10

/** Means over two pixels: hills that are shorter would only blacken the line. */
function smoothed(points: Point[]): Point[] {
  const columns = new Map<number, { sum: number; count: number }>()
  for (const [x, y] of points) {
    const column = columns.get(Math.round(x / 2)) ?? { sum: 0, count: 0 }
    columns.set(Math.round(x / 2), { sum: column.sum + y, count: column.count + 1 })
  }
  return [...columns].map(([x, { sum, count }]): Point => [x * 2, round(sum / count)]).sort((a, b) => a[0] - b[0])
}

/** One point per pixel and every turn, so that a day of seconds draws as fast as one of minutes. */
function thinned(points: Point[]): Point[] {
  const kept: Point[] = []
  points.forEach((point, i) => {
    const last = kept.at(-1)
    const next = points[i + 1]
    const isTurn = last !== undefined && next !== undefined && (point[1] - last[1]) * (next[1] - point[1]) < 0
    if (last === undefined || next === undefined || isTurn || point[0] - last[0] >= 1) kept.push(point)
  })
  return kept
}

export interface Reading {
  atMs: number
  inW: number
  outW: number
  chargePct: number
  wh: number
  km: number
  speedKmh: number
}

/** What the day is expected to be like at one instant. */
export function readingAt(day: DayBudget, atMs: number): Reading {
  const { series } = day
  const i = stepAt(series.toMs, atMs)
  const share = Math.min(1, Math.max(0, (atMs - series.fromMs[i]) / Math.max(series.toMs[i] - series.fromMs[i], 1)))
  const between = (column: number[], opening: number): number => {
    const before = i === 0 ? opening : column[i - 1]
    return before + (column[i] - before) * share
  }
  return {
    atMs,
    inW: series.inW[i],
    outW: series.outW[i],
    speedKmh: series.speedKmh[i],
    chargePct: between(series.chargePct, day.opening.chargePct),
    wh: between(series.wh, day.opening.wh),
    km: between(series.km, series.km[0]),
  }
}
