import { type CoastUnknowns, fitTerms, type LeastSquares, type LinearPrior, termCovariance } from './coast-down-fit.ts'
import { firstGuess } from './coast-down-guess.ts'
import { type ResidualNoise, residualNoise } from './coast-down-noise.ts'
import type { CoastCar, CoastRun, LoadTerm } from './coast-down-trace.ts'
import type { Matrix } from './matrix.ts'

/** The terms with what is known of them. */
export interface CoastEstimate {
  fit: LeastSquares
  /** Of the terms, widened where residuals hang together; null where the runs cannot tell them apart at all. */
  covariance: Matrix | null
  noise: ResidualNoise
  /** Standard deviation of a row about the fit. */
  noiseMps: number
  rows: number
  /** Independent rows less the unknowns, at least 1. */
  dof: number
  /** Variance of a row as far as it counts: widened by the rows that make one fact. */
  varianceMps2: number
}

/** Rows without any noise are still rounded somewhere. [(m/s)²] */
const LEAST_VARIANCE = 1e-18
/** Rounds of weighing a prior against the noise that was found. */
const ROUNDS = 3

/**
 * The terms that fit the runs, their covariance, and the noise from row to row.
 *
 * The noise comes from the residuals; where these hang together, the variance of a row is multiplied by the rows
 * that make one fact and the degrees of freedom shrink with them.
 *
 * @param terms to be found
 */
export function estimateTerms(
  car: CoastCar,
  runs: readonly CoastRun[],
  terms: readonly LoadTerm[],
  prior: LinearPrior,
): CoastEstimate {
  const rows = runs.reduce((sum, run) => sum + run.timeS.length, 0)
  const unknowns = terms.length + runs.length
  let from: CoastUnknowns = firstGuess(car, runs, prior.rollingPerMps)
  let varianceMps2 = 1e-4
  for (let round = 1; ; round++) {
    const fit = fitTerms(car, runs, terms, from, prior, varianceMps2)
    const noise = residualNoise(fit.residuals)
    const rowVariance = Math.max(fit.squares / Math.max(rows - unknowns, 1), LEAST_VARIANCE)
    varianceMps2 = rowVariance * noise.rowsPerFact
    from = { load: fit.load, startMps: fit.startMps }
    if (terms.includes('rollingPerMps') && round < ROUNDS) continue
    return {
      fit,
      covariance: termCovariance(fit.normal, terms.length, varianceMps2),
      noise,
      noiseMps: Math.sqrt(rowVariance),
      rows,
      dof: Math.max(rows / noise.rowsPerFact - unknowns, 1),
      varianceMps2,
    }
  }
}
