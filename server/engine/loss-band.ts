import type { TrackerBelief } from './belief.ts'
import { InputError } from './input-error.ts'
import { quadratic } from './matrix.ts'
import type { Tracker, TrackerLosses } from './tracker.ts'
import { trackerOutputW } from './tracker-output.ts'
import { lossFactors } from './loss-terms.ts'

/** Where a tracker is looked at. */
export interface TrackerPoint {
  inputW: number
  inputV: number
  outputV: number
}

/** Efficiency along the input power; all of one length. */
export interface EfficiencyBand {
  inputW: Float64Array
  efficiency: Float64Array
  low: Float64Array
  high: Float64Array
}

/** Never asked: the losses hold at every point, the window says where the tracker may be. */
const ANY_WINDOW = {
  inputMinV: 0,
  inputMaxV: Infinity,
  inputMaxA: Infinity,
  outputMinV: 0,
  outputMaxV: Infinity,
  outputMaxA: Infinity,
  maxW: Infinity,
}

const trackerOf = (name: string, losses: TrackerLosses): Tracker => ({
  name,
  losses,
  window: ANY_WINDOW,
  trackingEfficiency: 1,
})

/**
 * Efficiency of a tracker as it is held to be at a point, and its standard deviation.
 *
 * The same curve as trackerOutputW; its uncertainty to first order in the terms.
 *
 * @param belief its terms and their covariance
 * @param point  power and voltages, above 0. [W, V]
 * @returns efficiency 0..1, sd at least 0
 * @throws InputError naming the number that is wrong
 */
export function heldEfficiency(
  belief: Pick<TrackerBelief, 'name' | 'losses' | 'covariance'>,
  point: TrackerPoint,
): { efficiency: number; sd: number } {
  for (const name of ['inputW', 'inputV', 'outputV'] as const) {
    const value = point[name]
    if (!(value > 0 && value < Infinity)) throw new InputError('out-of-range', name, `${value} given, above 0 expected`)
  }
  const { inputW, inputV, outputV } = point
  const outputW = trackerOutputW(trackerOf(belief.name, belief.losses), inputW, inputV, outputV)
  const factors = lossFactors(inputW / inputV, outputV, outputW / outputV)
  // What the rectifier loses depends on what comes out: more loss elsewhere means a little less there.
  const share = 1 / (1 + belief.losses.rectifierV / outputV)
  const sdW = Math.sqrt(Math.max(quadratic(belief.covariance, factors), 0)) * share
  return { efficiency: outputW / inputW, sd: sdW / inputW }
}

/**
 * A tracker's efficiency curve with its band along the input power, at given voltages.
 *
 * The bench's band is that of the belief without readings. Where little power comes in the band may reach 0.
 *
 * @param belief  its terms and their covariance
 * @param volts   voltages at both sides, above 0. [V]
 * @param inputW  powers, above 0. [W]
 * @param factor  standard deviations to each side; see coverageFactor
 * @returns low and high within 0..1
 * @throws InputError naming the number that is wrong
 */
export function efficiencyBand(
  belief: Pick<TrackerBelief, 'name' | 'losses' | 'covariance'>,
  volts: { inputV: number; outputV: number },
  inputW: ArrayLike<number>,
  factor: number,
): EfficiencyBand {
  if (!(factor > 0 && factor < Infinity))
    throw new InputError('out-of-range', 'factor', `${factor} given, above 0 expected`)
  const points = Array.from(inputW, (W) => heldEfficiency(belief, { inputW: W, ...volts }))
  return {
    inputW: Float64Array.from(inputW),
    efficiency: Float64Array.from(points, ({ efficiency }) => efficiency),
    low: Float64Array.from(points, ({ efficiency, sd }) => Math.max(efficiency - factor * sd, 0)),
    high: Float64Array.from(points, ({ efficiency, sd }) => Math.min(efficiency + factor * sd, 1)),
  }
}
