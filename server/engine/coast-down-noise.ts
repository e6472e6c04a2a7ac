/** What a fit leaves unexplained, and how much of it is news from row to row. */
export interface ResidualNoise {
  /** Correlation of neighbouring residuals, −1..1. */
  lagOne: number
  /** Whether nothing speaks against independent rows. */
  isWhite: boolean
  /** Rows that tell as much as one independent row, at least 1. */
  rowsPerFact: number
}

/** Lags of the test for whiteness, and its limit: χ² with 10 degrees of freedom, 1 in 100 beyond. From memory. */
const TESTED_LAGS = 10
const CHI_SQUARED_LIMIT = 23.209
/** Longest lag that is looked at; a longer memory is not told from a wrong model. */
const MOST_LAGS = 1000

/**
 * Whether residuals are independent from row to row, and how many rows make one fact where they are not.
 *
 * Whiteness by Ljung and Box over ten lags. Rows per fact is the integrated autocorrelation 1 + 2·Σρ, cut where
 * pairs of neighbouring lags no longer add up to something above 0. Memory longer than a third of a run is not seen.
 *
 * @param runs residuals of each run, in order of time
 * @source Ljung & Box 1978, Biometrika 65:297; Geyer 1992, Statistical Science 7:473, §3.3 (from memory)
 */
export function residualNoise(runs: readonly Float64Array[]): ResidualNoise {
  const rows = runs.reduce((sum, run) => sum + run.length, 0)
  const varianceSum = autocovariance(runs, 0)
  if (!(varianceSum > 0)) return { lagOne: 0, isWhite: true, rowsPerFact: 1 }
  const correlation = (lag: number): number => autocovariance(runs, lag) / varianceSum
  let statistic = 0
  for (let lag = 1; lag <= TESTED_LAGS && lag < rows; lag++) statistic += correlation(lag) ** 2 / (rows - lag)
  const isWhite = rows * (rows + 2) * statistic <= CHI_SQUARED_LIMIT
  const longest = Math.max(...runs.map((run) => run.length))
  const lagOne = correlation(1)
  return { lagOne, isWhite, rowsPerFact: isWhite ? 1 : memory(correlation, Math.min(longest / 3, MOST_LAGS)) }
}

/** 1 + 2·Σρ, summed in pairs of lags while they stay above 0. */
function memory(correlation: (lag: number) => number, mostLags: number): number {
  let sum = -1
  for (let lag = 0; lag + 1 <= mostLags; lag += 2) {
    const pair = (lag === 0 ? 1 : correlation(lag)) + correlation(lag + 1)
    if (pair <= 0) break
    sum += 2 * pair
  }
  return Math.max(sum, 1)
}

/** Mean product of residuals so many rows apart, within runs. */
function autocovariance(runs: readonly Float64Array[], lag: number): number {
  let [sum, pairs] = [0, 0]
  for (const run of runs) {
    for (let i = lag; i < run.length; i++) sum += run[i] * run[i - lag]
    pairs += Math.max(run.length - lag, 0)
  }
  return pairs === 0 ? 0 : sum / pairs
}
