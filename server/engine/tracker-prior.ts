import { InputError } from './input-error.ts'
import { benchCovariance, fullOnBench, type FullPower, type SpreadPoint, sdsLosing, WIDE_SHARE } from './bench-told.ts'
import { fitLosses } from './loss-fit.ts'
import { lossesOf, TERMS } from './loss-terms.ts'
import { diagonal, type Matrix, rootDiagonal } from './matrix.ts'
import type { TrackerLosses } from './tracker.ts'

/** What is held of a tracker before it is read in the car. */
export interface TrackerPrior {
  name: string
  losses: TrackerLosses
  /** Of the four terms in the order of TERMS, in their own units. */
  covariance: Matrix
  /** Power in whose shares losses are compared: the most that the tracker takes. */
  referenceW: number
}

/**
 * A term that the bench shows as nothing may still be something: one standard deviation of it is what
 * would lose this share of full power. Ours; no source.
 */
export const FLOOR_SHARE = 0.001

/** Below this share of its floor a fitted term is nothing: the last digits of a bench. */
const NOTHING = 1e-6

/**
 * A prior from loss terms that were given, each uncertain by a share of itself and apart from the others.
 *
 * A term of 0 takes the floor, FLOOR_SHARE of full power.
 *
 * @param spread standard deviation of each term as a fraction of it, above 0
 * @throws InputError naming what is out of range
 */
export function priorFromTerms(name: string, losses: TrackerLosses, spread: number, full: FullPower): TrackerPrior {
  checkAbove('spread', spread)
  checkFull(full)
  const floors = sdsLosing(FLOOR_SHARE, full)
  const variances = TERMS.map((term, j) => {
    if (!(losses[term] >= 0 && losses[term] < Infinity))
      refuse(`losses.${term}`, losses[term], 'a number of at least 0')
    return (losses[term] > 0 ? spread * losses[term] : floors[j]) ** 2
  })
  return { name, losses: { ...losses }, covariance: diagonal(variances), referenceW: full.W }
}

/**
 * A prior from a bench: the curve that fitLosses gives, as uncertain as the points' spread leaves it.
 *
 * Covariance of weighted least squares, (AᵀΣ⁻¹A + D⁻¹)⁻¹, where D lets each term lose WIDE_SHARE of full power
 * at the bench's mean voltages, so that terms the bench cannot tell apart stay within reason. A term that the fit
 * leaves at 0 is uncertain by at least FLOOR_SHARE of full power, or it could never grow. (The curve itself is
 * fitLosses' own, which weighs all points alike.)
 *
 * @param points at least four
 * @param fullW  most power that the tracker takes. [W]
 * @throws InputError naming the point and field that is wrong
 * @source weighted least squares: Draper & Smith, Applied Regression Analysis (from memory); D and floor are ours
 */
export function priorFromBench(name: string, points: readonly SpreadPoint[], fullW: number): TrackerPrior {
  checkAbove('fullW', fullW)
  const { losses } = fitLosses(points)
  for (const [i, { efficiencySd }] of points.entries()) checkAbove(`points[${i}].efficiencySd`, efficiencySd)
  const full = fullOnBench(points, fullW)
  const covariance = benchCovariance(points, sdsLosing(WIDE_SHARE, full))
  for (const [j, floor] of sdsLosing(FLOOR_SHARE, full).entries()) {
    const at = j * TERMS.length + j
    if (losses[TERMS[j]] < NOTHING * floor) covariance.data[at] = Math.max(covariance.data[at], floor ** 2)
  }
  return { name, losses, covariance, referenceW: fullW }
}

/** Standard deviation of each term of a prior. */
export const priorSds = (prior: TrackerPrior): TrackerLosses => lossesOf(rootDiagonal(prior.covariance))

/**
 * The same curve, less sure: every standard deviation times a factor.
 *
 * @param factor at least 1
 */
export function widened(prior: TrackerPrior, factor: number): TrackerPrior {
  if (!(factor >= 1 && factor < Infinity)) refuse('factor', factor, 'at least 1')
  const { size, data } = prior.covariance
  return { ...prior, covariance: { size, data: data.map((value) => value * factor * factor) } }
}

function checkFull(full: FullPower): void {
  for (const name of ['W', 'inputV', 'outputV'] as const) checkAbove(`full.${name}`, full[name])
}

function checkAbove(field: string, value: number): void {
  if (!(value > 0 && value < Infinity)) refuse(field, value, 'a number above 0')
}

function refuse(field: string, value: number, wanted: string): never {
  throw new InputError('out-of-range', field, `${value} given, ${wanted} expected`)
}
