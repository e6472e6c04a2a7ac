import { checkEvidence, type Evidence, lostW, type MeterPrior, shareRow } from './evidence.ts'
import { identifiedTerms } from './identified.ts'
import { block, type Matrix, placeBlock, rootDiagonal, scaled, zeros } from './matrix.ts'
import { type NormalInverseGamma, update } from './regression.ts'
import { quantileT } from './student-t.ts'
import type { TrackerLosses } from './tracker.ts'
import { lossesOf, type Term, TERMS, termsOf } from './loss-terms.ts'
import { truncateAtZero } from './truncated.ts'

export interface TrackerBelief {
  name: string
  /** The most likely terms, none negative; the bench's own where nothing was read. */
  losses: TrackerLosses
  /** Root mean square distance of each term from `losses`. */
  sd: TrackerLosses
  /** Whether the readings tell a term from the others. */
  isIdentified: Record<Term, boolean>
  /** Mean products of the terms' distances from `losses`, in the order of TERMS. */
  covariance: Matrix
  referenceW: number
}

/** A meter with its class, and what is held of its gain. */
export interface MeterBelief extends MeterPrior {
  /** What it shows too much, a fraction. */
  gain: number
  /** Of `gain`; `gainSd` is what it was before any reading. */
  sd: number
}

/** What is held of trackers and meters. */
export interface Belief {
  trackers: TrackerBelief[]
  meters: MeterBelief[]
  /** All unknowns: four terms a tracker, then the gains. */
  values: Float64Array
  /** Mean products of their distances from `values`. */
  covariance: Matrix
  /** Standard deviation of a reading's own scatter, as a share of the tracker's reference power. */
  noiseShare: number
  /** Degrees of freedom of every statement. */
  dof: number
}

/** Scatter of a reading held before any, as a share of reference power. Ours; no source. */
const NOISE_SHARE = 0.002

/** Weight of that: three to start with, the mean variance then rate/(shape − 1). */
const NOISE_SHAPE = 3
const NOISE_RATE = (NOISE_SHAPE - 1) * NOISE_SHARE ** 2

/**
 * What is held of the loss terms and the meters' gains after readings.
 *
 * One conjugate regression over all trackers and meters, so that a meter is one unknown wherever it was used:
 * Pin − Pout = terms·(1, Iin·Vout, Iin², Iout) + gains·(+Pin at the input, −Pout at the output) + scatter, in shares
 * of the tracker's reference power. Gains to first order. The priors are watts and per cents, not multiples of the
 * scatter: V0 is their covariance over the noise variance that comes out, which is found by repetition. Terms
 * are cut off at 0; see truncateAtZero.
 *
 * @throws InputError naming the field that is wrong
 * @source Gelman et al., Bayesian Data Analysis, ch. 14 (from memory); the settled noise is ours
 */
export function learn(evidence: Evidence): Belief {
  checkEvidence(evidence)
  const { trackers, meters, readings } = evidence
  const prior = priorOf(evidence)
  const size = prior.mean.length
  const rows = readings.map((reading) => shareRow(evidence, reading))
  const y = readings.map((reading) => lostW(reading) / trackers[reading.tracker].referenceW)
  const { noise, held } = settle(prior, rows, y)
  const posterior = scaled(held.covariance, noise)
  const bounded = Array.from({ length: size }, (_, i) => i < trackers.length * TERMS.length)
  const cut = truncateAtZero(held.mean, posterior, bounded)
  const covariance = aboutMode(cut.covariance, cut.mean, cut.mode)
  return {
    trackers: trackers.map(({ name, referenceW, covariance: before }, t) => {
      const own = block(covariance, t * TERMS.length, TERMS.length)
      return {
        name,
        referenceW,
        losses: lossesOf(cut.mode.subarray(t * TERMS.length, (t + 1) * TERMS.length)),
        sd: lossesOf(rootDiagonal(own)),
        isIdentified: identifiedTerms(before, block(posterior, t * TERMS.length, TERMS.length)),
        covariance: own,
      }
    }),
    meters: meterBeliefs(meters, cut.mode, covariance),
    values: cut.mode,
    covariance,
    noiseShare: Math.sqrt(noise),
    dof: 2 * held.shape,
  }
}

/** Means and absolute covariance before any reading. */
function priorOf({ trackers, meters }: Evidence): { mean: Float64Array; covariance: Matrix } {
  const from = trackers.length * TERMS.length
  const covariance = zeros(from + meters.length)
  for (const [t, tracker] of trackers.entries()) placeBlock(covariance, t * TERMS.length, tracker.covariance)
  for (const [k, { gainSd }] of meters.entries()) {
    placeBlock(covariance, from + k, { size: 1, data: Float64Array.of(gainSd ** 2) })
  }
  const terms = trackers.flatMap(({ losses }) => termsOf(losses))
  return { mean: Float64Array.from([...terms, ...meters.map(() => 0)]), covariance }
}

/**
 * The regression whose V0 times its own mean noise variance is the prior's covariance.
 * What a reading adds to the noise rises with it and ever less, so that repetition comes to the one answer.
 */
function settle(prior: { mean: Float64Array; covariance: Matrix }, rows: Float64Array[], y: number[]) {
  let noise = NOISE_RATE / (NOISE_SHAPE - 1)
  let held: NormalInverseGamma
  for (let pass = 1; ; pass++) {
    const { mean, covariance } = prior
    held = update({ mean, covariance: scaled(covariance, 1 / noise), shape: NOISE_SHAPE, rate: NOISE_RATE }, rows, y)
    const next = held.rate / (held.shape - 1)
    const isSettled = Math.abs(next - noise) <= 1e-9 * noise || pass === 200
    if (isSettled) return { noise, held }
    noise = next
  }
}

function meterBeliefs(meters: readonly MeterPrior[], values: Float64Array, covariance: Matrix): MeterBelief[] {
  const from = values.length - meters.length
  const sds = rootDiagonal(covariance)
  return meters.map((meter, k) => ({ ...meter, gain: values[from + k], sd: sds[from + k] }))
}

/** Mean products of distances from the mode: those from the mean, and the mean's own. */
function aboutMode({ size, data }: Matrix, mean: Float64Array, mode: Float64Array): Matrix {
  const out = { size, data: data.slice() }
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) out.data[i * size + j] += (mean[i] - mode[i]) * (mean[j] - mode[j])
  }
  return out
}

/**
 * How many of a belief's standard deviations to each side hold a share of what may be.
 *
 * @param share 0.95 unless told otherwise, above 0 and below 1
 */
export const coverageFactor = (belief: Pick<Belief, 'dof'>, share = 0.95): number =>
  quantileT((1 + share) / 2, belief.dof) * Math.sqrt((belief.dof - 2) / belief.dof)
