import type { CoastFit } from '../engine/coast-down.ts'
import type { CoastDownDocument } from './coast-down-result.ts'
import { LEAST_KMH } from './coast-down-model.ts'

/** Highest mean wind of a test, and highest across the road. [km/h] @source SAE J1263 (abstract) */
const MOST_WIND_KMH = 16
const MOST_ACROSS_KMH = 8
/** A row this many standard deviations off is no ordinary scatter. */
const FAR_OFF = 5
/** From this slope of the road on, both ways are hardly the same road to a tyre or a log. (ours) [%] */
const STEEP_PCT = 0.2

const one = (value: number): string => value.toFixed(1)

/** What should be known of a fit before its figures are used, in plain sentences. */
export function coastWarnings(result: Omit<CoastDownDocument, 'warnings'>, fit: CoastFit, leftOut: number): string[] {
  return [...windWarnings(result), ...roadWarnings(result), ...scatterWarnings(result, fit), ...rowWarnings(leftOut)]
}

function windWarnings({ wind }: Pick<CoastDownDocument, 'wind'>): string[] {
  const { alongMps, acrossMps } = wind
  const said: string[] = []
  const meanKmh = 3.6 * Math.hypot(alongMps, acrossMps ?? 0)
  if (meanKmh > MOST_WIND_KMH)
    said.push(
      `Wind of ${one(meanKmh)} km/h: SAE J1263 tests up to ${MOST_WIND_KMH} km/h. Repeat it on a calmer morning.`,
    )
  if (acrossMps !== null && acrossMps * 3.6 > MOST_ACROSS_KMH)
    said.push(
      `Crosswind of ${one(acrossMps * 3.6)} km/h: SAE J1263 tests up to ${MOST_ACROSS_KMH} km/h. Air from the side adds drag that is not told apart.`,
    )
  if (acrossMps === null) said.push('No crosswind in the file: what it adds to drag counts as drag area.')
  return said
}

function roadWarnings({ grade, runs, wind }: Pick<CoastDownDocument, 'grade' | 'runs' | 'wind'>): string[] {
  const said: string[] = []
  if (grade.source === 'found' && Math.abs(grade.pct) > STEEP_PCT)
    said.push(`A slope of ${grade.pct.toFixed(2)} % was found. It cancels only where both ways run over the same road.`)
  const there = runs.filter((run) => run.direction === 'there').length
  const isFound = grade.source === 'found' || wind.source === 'found'
  if (isFound && there * 2 !== runs.length)
    said.push(`${there} runs there and ${runs.length - there} back: as many each way cancel wind and slope best.`)
  return said
}

function scatterWarnings({ noise }: Pick<CoastDownDocument, 'noise'>, fit: CoastFit): string[] {
  const said: string[] = []
  if (!noise.isWhite)
    said.push(
      `Neighbouring rows err alike: ${noise.rows} rows count as ${Math.round(noise.independentRows)}, and the intervals are wider for it.`,
    )
  const off = fit.residuals.reduce(
    (sum, run) => sum + run.filter((left) => Math.abs(left) > FAR_OFF * fit.noiseMps).length,
    0,
  )
  if (off > 0)
    said.push(
      `${off} ${off === 1 ? 'row lies' : 'rows lie'} more than ${FAR_OFF} standard deviations off; look at them in the plot.`,
    )
  return said
}

const rowWarnings = (leftOut: number): string[] =>
  leftOut === 0 ? [] : [`${leftOut} rows from ${LEAST_KMH} km/h down were left out.`]
