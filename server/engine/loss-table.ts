import type { BenchPoint } from './loss-fit.ts'

/**
 * What a bench lost beyond a curve, point by point, made ready to be asked.
 *
 * Places are input power, input and output voltage, each counted in the bench's own range of it; what the bench
 * never varied does not count.
 */
export interface LossTable {
  /** Lowest and highest of power, input and output voltage. [W, V, V] */
  low: [number, number, number]
  high: [number, number, number]
  /** One over each range; 0 where there is none. */
  scale: [number, number, number]
  /** Places of the points in the bench's ranges, 0..1, three to a point. */
  places: Float64Array
  /** Lost there beyond the curve. [W] */
  extraW: Float64Array
}

/** Squared distance below which a place is the point itself, in the bench's ranges. */
const SAME = 1e-18

/**
 * The table of a bench: what each point lost beyond a curve through all of them. Points at one place become their mean.
 *
 * @param points     checked by fitLosses
 * @param curveLossW loss of the curve at a point. [W]
 */
export function lossTable(points: readonly BenchPoint[], curveLossW: (point: BenchPoint) => number): LossTable {
  const columns = [points.map((p) => p.inputW), points.map((p) => p.inputV), points.map((p) => p.outputV)]
  const ends = (of: (...values: number[]) => number) => columns.map((column) => of(...column)) as LossTable['low']
  const low = ends(Math.min)
  const high = ends(Math.max)
  const scale = low.map((from, k) => (high[k] > from ? 1 / (high[k] - from) : 0)) as LossTable['scale']
  const sums = new Map<string, { place: number[]; extraW: number; n: number }>()
  points.forEach((point, i) => {
    const place = columns.map((column, k) => (column[i] - low[k]) * scale[k])
    const lossW = point.inputW - (point.outputW ?? (point.efficiency ?? 0) * point.inputW)
    const sum = sums.get(place.join(' ')) ?? { place, extraW: 0, n: 0 }
    sum.extraW += lossW - curveLossW(point)
    sum.n++
    sums.set(place.join(' '), sum)
  })
  const all = [...sums.values()]
  return {
    low,
    high,
    scale,
    places: Float64Array.from(all.flatMap(({ place }) => place)),
    extraW: Float64Array.from(all, ({ extraW, n }) => extraW / n),
  }
}

/**
 * What the bench lost beyond its curve, between its points: their mean weighed by one over distance to the fourth.
 *
 * Exactly the points at the points, and nowhere beyond what some point showed. Outside the bench's powers and voltages
 * the nearest edge of them counts, so that the curve carries on with the edge's watts.
 *
 * @returns of either sign. [W]
 * @source inverse distance weighting: Shepard 1968, ACM National Conference 517–524 (from memory); its power of 4 is ours
 */
export function tableExtraW(table: LossTable, inputW: number, inputV: number, outputV: number): number {
  const { low, high, scale, places, extraW } = table
  const w = (Math.min(Math.max(inputW, low[0]), high[0]) - low[0]) * scale[0]
  const v = (Math.min(Math.max(inputV, low[1]), high[1]) - low[1]) * scale[1]
  const u = (Math.min(Math.max(outputV, low[2]), high[2]) - low[2]) * scale[2]
  let weights = 0
  let sum = 0
  for (let i = 0, k = 0; i < extraW.length; i++, k += 3) {
    const dw = places[k] - w
    const dv = places[k + 1] - v
    const du = places[k + 2] - u
    const square = dw * dw + dv * dv + du * du
    if (square < SAME) return extraW[i]
    const weight = 1 / (square * square)
    weights += weight
    sum += weight * extraW[i]
  }
  return sum / weights
}
