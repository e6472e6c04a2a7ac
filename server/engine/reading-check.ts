import { type Belief, coverageFactor } from './belief.ts'
import { checkReading, lostW, type MeterPrior, shareRow, type TrackerReading } from './evidence.ts'
import { InputError } from './input-error.ts'
import { heldEfficiency } from './loss-band.ts'
import { dot, quadratic } from './matrix.ts'
import type { TrackerLimit, TrackerWindow } from './tracker.ts'

export type Verdict = 'counts' | 'impossible' | 'at-limit' | 'pack-full' | 'far-off'

/** What a reading says, and whether it is learned from. */
export interface Judgement {
  /** Power out over power in, as shown. */
  efficiency: number
  /** Standard uncertainty of that from the meters' classes. */
  uncertainty: number
  /** The tracker's curve at that point, and its 95 % band. */
  expected: number
  low: number
  high: number
  /** How far the reading is from what these meters should show, in predictive scales. */
  distance: number
  verdict: Verdict
  counts: boolean
  /** The edge of the window at which the reading was taken, for 'at-limit'. */
  limit: TrackerLimit | null
  /** One sentence to the crew. */
  reason: string
  /** With the clamps swapped: efficiency of both readings together, free of the meters' gains. */
  swappedEfficiency: number | null
}

/** What is known when a reading is judged. */
export interface Situation {
  /** Held before this reading. */
  belief: Belief
  /** Of the reading's tracker. */
  window: TrackerWindow
  /** Voltage to which the pack is charged; at it the tracker no longer follows the sun. Null: not known. [V] */
  packFullV: number | null
  /** An earlier reading of the same point with the clamps the other way round; see isSwapOf. */
  swapped?: TrackerReading
}

/** Nearer than this share to an edge is at it: no meter of the trade tells more. Ours; no source. */
const AT_EDGE = 0.01

/** The same for the pack's voltage, which is known better. Ours; no source. */
const AT_FULL = 0.003

/** Readings whose powers differ by less are of one point: the curve is flat there. Ours; no source. */
const SAME_POINT = 0.2

/** Predictive scales beyond which a reading is to be read again. */
const FAR = 3

/**
 * What a reading says against the tracker as it is held to be, and whether it counts.
 *
 * More out than in by over two standard uncertainties is impossible; by less it counts like any other, since
 * leaving it out would lift the losses. At an edge of the window or with the pack full the tracker does not work at
 * its best point, so that is not learned from. Beyond three predictive scales it is to be read again with the
 * clamps swapped; once it was, both count.
 *
 * @throws InputError naming the field that is wrong
 */
export function judge(reading: TrackerReading, situation: Situation): Judgement {
  const { belief, window, packFullV, swapped = null } = situation
  checkReading(reading, belief.trackers.length, belief.meters.length)
  if (swapped !== null && !isSwapOf(reading, swapped)) {
    throw new InputError(
      'not-swapped',
      'swapped',
      `reading ${swapped.id} is not the same point with the clamps swapped`,
    )
  }
  const inputW = reading.inputV * reading.inputA
  const efficiency = shownEfficiency(reading)
  const uncertainty = efficiency * gainUncertainty(reading, belief)
  const { inputV, outputV } = reading
  const held = heldEfficiency(belief.trackers[reading.tracker], { inputW, inputV, outputV })
  const half = coverageFactor(belief) * held.sd
  const distance = distanceOf(reading, belief)
  const swappedEfficiency = swapped === null ? null : Math.sqrt(efficiency * shownEfficiency(swapped))
  const says = verdictOf(reading, { efficiency, uncertainty, distance, window, packFullV, swappedEfficiency })
  return {
    efficiency,
    uncertainty,
    expected: held.efficiency,
    low: Math.max(held.efficiency - half, 0),
    high: Math.min(held.efficiency + half, 1),
    distance,
    ...says,
    counts: says.verdict === 'counts',
    swappedEfficiency,
  }
}

/** Power out over power in, as a reading shows it. */
export const shownEfficiency = ({ inputV, inputA, outputV, outputA }: TrackerReading): number =>
  (outputV * outputA) / (inputV * inputA)

/**
 * Relative standard uncertainty of an efficiency from the classes of its meters.
 *
 * Gains in quadrature; a meter that shows both sides cancels.
 */
export function gainUncertainty({ meters }: TrackerReading, belief: { meters: readonly MeterPrior[] }): number {
  const sign = belief.meters.map(() => 0)
  for (const meter of [meters.outputV, meters.outputA]) if (meter >= 0) sign[meter] += 1
  for (const meter of [meters.inputV, meters.inputA]) if (meter >= 0) sign[meter] -= 1
  return Math.hypot(...sign.map((times, k) => times * belief.meters[k].gainSd))
}

/** How far the lost power is from what is held of tracker and meters together, in scales of Student's t. */
function distanceOf(reading: TrackerReading, belief: Belief): number {
  const row = shareRow(belief, reading)
  const lostShare = lostW(reading) / belief.trackers[reading.tracker].referenceW
  const variance = quadratic(belief.covariance, row) + belief.noiseShare ** 2
  const scale = Math.sqrt((variance * (belief.dof - 2)) / belief.dof)
  return (lostShare - dot(row, belief.values)) / scale
}

/**
 * Whether two readings are of one point of one tracker with the clamps the other way round.
 *
 * Both current meters changed sides, the voltage meters both or neither, and power and voltages are the same
 * within a fifth.
 */
export function isSwapOf(a: TrackerReading, b: TrackerReading): boolean {
  const { meters: m } = a
  const { meters: n } = b
  const isNear = (x: number, y: number): boolean => Math.abs(x - y) <= SAME_POINT * Math.max(x, y)
  const clampsChanged = m.inputA >= 0 && m.outputA >= 0 && m.inputA !== m.outputA
  const voltsKept = m.inputV === n.inputV && m.outputV === n.outputV
  const voltsChanged = m.inputV === n.outputV && m.outputV === n.inputV
  return (
    a.tracker === b.tracker &&
    clampsChanged &&
    m.inputA === n.outputA &&
    m.outputA === n.inputA &&
    (voltsKept || voltsChanged) &&
    isNear(a.inputV, b.inputV) &&
    isNear(a.outputV, b.outputV) &&
    isNear(a.inputV * a.inputA, b.inputV * b.inputA)
  )
}

interface Finding {
  efficiency: number
  uncertainty: number
  distance: number
  window: TrackerWindow
  packFullV: number | null
  swappedEfficiency: number | null
}

const pct = (fraction: number): string => `${(100 * fraction).toFixed(1)} %`

function verdictOf(reading: TrackerReading, finding: Finding): Pick<Judgement, 'verdict' | 'limit' | 'reason'> {
  const { efficiency, uncertainty, distance, packFullV, swappedEfficiency } = finding
  if (efficiency - 1 > 2 * uncertainty) {
    const reason = `${pct(efficiency)} comes out, more than the meters' ±${pct(2 * uncertainty)} allow: kept, left out`
    return { verdict: 'impossible', limit: null, reason }
  }
  if (packFullV !== null && reading.outputV >= packFullV * (1 - AT_FULL)) {
    const reason = `the pack is full at ${reading.outputV} V: the tracker holds back, so this is kept and not learned from`
    return { verdict: 'pack-full', limit: null, reason }
  }
  const limit = edgeOf(reading, finding.window)
  if (limit !== null) {
    return { verdict: 'at-limit', limit, reason: `${EDGES[limit]}: kept and not learned from` }
  }
  if (Math.abs(distance) > FAR && swappedEfficiency === null) {
    const side = distance > 0 ? 'below' : 'above'
    const reason = `${pct(efficiency)} is far ${side} the band: swap the clamps and read again`
    return { verdict: 'far-off', limit: null, reason }
  }
  const both = swappedEfficiency === null ? '' : `; with the clamps swapped ${pct(swappedEfficiency)} by both readings`
  return { verdict: 'counts', limit: null, reason: `${pct(efficiency)} counts${both}` }
}

const EDGES = {
  'cannot-step-down': 'the input is at the voltage of the pack, where a boost tracker cannot go on',
  'input-low': "the input is at the window's lowest voltage",
  'input-high': "the input is at the window's highest voltage",
  current: "the input is at the window's highest current",
  power: "the input is at the window's highest power",
  'output-current': "the output is at the window's highest current",
  'output-low': "the output is at the window's lowest voltage",
  'output-high': "the output is at the window's highest voltage",
  asleep: 'the tracker is asleep',
  derated: 'the tracker holds back for heat',
  dead: 'the tracker is marked as dead',
} satisfies Record<TrackerLimit, string>

/** Which edge of the window a reading was taken at, if any. */
function edgeOf({ inputV, inputA, outputV, outputA }: TrackerReading, window: TrackerWindow): TrackerLimit | null {
  const isHigh = (value: number, edge: number): boolean => value >= edge * (1 - AT_EDGE)
  const isLow = (value: number, edge: number): boolean => value <= edge * (1 + AT_EDGE)
  if (isHigh(inputV, outputV - (window.leastRiseV ?? 0))) return 'cannot-step-down'
  if (isLow(inputV, window.inputMinV)) return 'input-low'
  if (isHigh(inputV, window.inputMaxV)) return 'input-high'
  if (isHigh(inputA, window.inputMaxA)) return 'current'
  if (isHigh(inputV * inputA, window.maxW)) return 'power'
  if (isHigh(outputA, window.outputMaxA)) return 'output-current'
  if (isLow(outputV, window.outputMinV)) return 'output-low'
  return isHigh(outputV, window.outputMaxV) ? 'output-high' : null
}
