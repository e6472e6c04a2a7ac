import type { TrackerSteps } from './balance.ts'
import { LIMITS, type Tracker, type TrackerLimit } from './tracker.ts'
import { trackerOutputW } from './tracker-output.ts'

/** Weights by share of rated power, as commonly printed for European and Californian efficiency. */
export const WEIGHTS: Record<'european' | 'californian', readonly (readonly [number, number])[]> = {
  european: [
    [0.05, 0.03],
    [0.1, 0.06],
    [0.2, 0.13],
    [0.3, 0.1],
    [0.5, 0.48],
    [1, 0.2],
  ],
  californian: [
    [0.1, 0.04],
    [0.2, 0.05],
    [0.3, 0.12],
    [0.5, 0.21],
    [0.75, 0.53],
    [1, 0.05],
  ],
}

/**
 * Efficiency of a tracker weighed by shares of a rated power at given voltages.
 *
 * @param rated power that counts as all, and the voltages at both sides, above 0. [W, V]
 * @returns 0..1
 * @source weights as commonly printed for European and Californian weighted efficiency
 */
export function weightedEfficiency(
  tracker: Tracker,
  weights: readonly (readonly [number, number])[],
  rated: { W: number; inputV: number; packV: number },
): number {
  const at = (share: number): number =>
    trackerOutputW(tracker, share * rated.W, rated.inputV, rated.packV) / (share * rated.W)
  return weights.reduce((sum, [share, weight]) => sum + weight * at(share), 0)
}

/**
 * Share of the best power that was taken over a time: Σ V·I·Δt over Σ Pmpp·Δt.
 *
 * @returns 0..1; 0 where there was nothing to take
 * @source EN 50530, static tracking efficiency (from memory)
 */
export function takenShare(
  takenW: ArrayLike<number>,
  bestW: ArrayLike<number>,
  durationS: ArrayLike<number>,
  [from, to]: readonly [number, number] = [0, durationS.length],
): number {
  let takenJ = 0
  let bestJ = 0
  for (let i = from; i < to; i++) {
    takenJ += takenW[i] * durationS[i]
    bestJ += bestW[i] * durationS[i]
  }
  return bestJ > 0 ? takenJ / bestJ : 0
}

/** What a tracker did over some steps. */
export interface Figures {
  inputJ: number
  lossJ: number
  bestJ: number
  /** Of takenShare. */
  takenShare: number
  /** Means by input energy; 0 where nothing was taken. */
  meanInputV: number
  meanPackV: number
  /** What bound, how long, and what it cost. */
  edges: { limit: TrackerLimit | 'full'; durationS: number; deniedJ: number }[]
}

/** Name of what bound in a step, null for nothing or no sun. */
export function edgeAt(steps: TrackerSteps, i: number): TrackerLimit | null {
  const limit = steps.limit[i] === 0 ? null : LIMITS[steps.limit[i] - 1]
  return limit === 'asleep' ? null : limit
}

/**
 * Sums and means of a tracker's steps.
 *
 * @param range first step and the one behind the last
 */
export function figuresOf(
  steps: TrackerSteps,
  durationS: ArrayLike<number>,
  range: readonly [number, number],
): Figures {
  const sums = { inputJ: 0, lossJ: 0, bestJ: 0, inputJV: 0, packJV: 0 }
  const edges = new Map<TrackerLimit | 'full', { durationS: number; deniedJ: number }>()
  const note = (limit: TrackerLimit | 'full', S: number, J: number): void => {
    const sum = edges.get(limit) ?? { durationS: 0, deniedJ: 0 }
    edges.set(limit, { durationS: sum.durationS + S, deniedJ: sum.deniedJ + J })
  }
  for (let i = range[0]; i < range[1]; i++) {
    const S = durationS[i]
    const inputJ = steps.inputW[i] * S
    sums.inputJ += inputJ
    sums.lossJ += inputJ - steps.outputW[i] * S
    sums.bestJ += steps.bestW[i] * S
    sums.inputJV += inputJ * steps.inputV[i]
    sums.packJV += inputJ * steps.packV[i]
    const limit = edgeAt(steps, i)
    if (limit !== null) note(limit, S, steps.deniedW[i] * S)
    if (steps.fullW[i] > 0) note('full', S, steps.fullW[i] * S)
  }
  const { inputJ, inputJV, packJV } = sums
  return {
    inputJ,
    lossJ: sums.lossJ,
    bestJ: sums.bestJ,
    takenShare: takenShare(steps.inputW, steps.bestW, durationS, range),
    meanInputV: inputJ > 0 ? inputJV / inputJ : 0,
    meanPackV: inputJ > 0 ? packJV / inputJ : 0,
    edges: [...edges].map(([limit, sum]) => ({ limit, ...sum })),
  }
}

/** Share of a thinned path that may go to where a limit begins and ends. */
const EDGE_SHARE = 0.6

/**
 * Some of a tracker's steps, in order, that still show where each limit began and ended: the longest stays first,
 * then evenly spread steps.
 *
 * @param most steps to keep, at least 10
 * @returns indices of the steps kept, the first and the last among them
 */
export function thinnedSteps(limit: ArrayLike<number>, most: number): number[] {
  const count = limit.length
  if (count <= most) return Array.from({ length: count }, (_, i) => i)
  const stays: [number, number][] = []
  for (let i = 0, from = 0; i < count; i++) {
    if (i + 1 < count && limit[i + 1] === limit[i]) continue
    stays.push([from, i])
    from = i + 1
  }
  stays.sort((a, b) => b[1] - b[0] - (a[1] - a[0]))
  const kept = new Set([0, count - 1])
  for (const [from, to] of stays) {
    if (kept.size + 2 > most * EDGE_SHARE) break
    kept.add(from).add(to)
  }
  const spread = most - kept.size
  for (let k = 0; k < spread; k++) kept.add(Math.round((k * (count - 1)) / (spread - 1)))
  return [...kept].sort((a, b) => a - b)
}
