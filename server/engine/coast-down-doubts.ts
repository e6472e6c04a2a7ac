import { type CoastReason, LEAST_ROWS } from './coast-down-check.ts'
import type { CoastEstimate } from './coast-down-estimate.ts'
import type { CoastTest } from './coast-down.ts'
import { MOST_CORRELATION, neededSpan, type NeededSpan } from './coast-down-span.ts'
import type { CoastLoad, LoadTerm } from './coast-down-trace.ts'
import type { Matrix } from './matrix.ts'
import { quantileT } from './student-t.ts'

/** An interval wider than this share of its value is no answer. */
const WIDEST = 1
/** Share below the upper end of an interval that holds 95 of 100. */
export const SURE = 0.975

export const covarianceOf = ({ size, data }: Matrix, i: number, j: number): number => data[i * size + j]

export const correlationOf = (covariance: Matrix): number =>
  covarianceOf(covariance, 0, 1) / Math.sqrt(covarianceOf(covariance, 0, 0) * covarianceOf(covariance, 1, 1))

/** Why a fit is no answer. */
export function doubtsOf(test: CoastTest, terms: readonly LoadTerm[], estimate: CoastEstimate): CoastReason[] {
  const { fit, covariance, dof, rows } = estimate
  const reason = (code: CoastReason['code'], detail: string): CoastReason => ({ code, run: null, detail })
  if (!fit.isSettled && fit.squares > 0) {
    const words = 'no rolling and drag follow these speeds; expected a car that coasts freely'
    return [reason('not-settled', words), spanReason(test, terms, estimate)]
  }
  const unknowns = terms.length + test.runs.length
  if (rows < unknowns + LEAST_ROWS) {
    return [reason('too-few-rows', `${rows} rows for ${unknowns} unknowns; expected at least ${unknowns + LEAST_ROWS}`)]
  }
  const doubts: CoastReason[] = []
  const r = covariance === null ? -1 : correlationOf(covariance)
  if (Math.abs(r) > MOST_CORRELATION) {
    doubts.push(
      reason(
        'correlated',
        `rolling and drag pull against each other with a correlation of ${r.toFixed(3)}; expected within ±${MOST_CORRELATION}`,
      ),
    )
  }
  for (const [name, j] of [
    ['rolling coefficient', 0],
    ['drag area', 1],
  ] as const) {
    const value = fit.load[terms[j]]
    const width = 2 * quantileT(SURE, dof) * Math.sqrt(covariance === null ? Infinity : covarianceOf(covariance, j, j))
    if (width <= WIDEST * value) continue
    const shown = `${value.toPrecision(3)} ± ${(width / 2).toPrecision(2)}${j === 1 ? ' m²' : ''}`
    doubts.push(
      reason('wide-interval', `the ${name} comes out at ${shown}; expected an interval no wider than its value`),
    )
  }
  if (doubts.length === 0) return []
  return [wouldDo(estimate) ? clingingReason(estimate) : spanReason(test, terms, estimate), ...doubts]
}

/** Whether the intervals would do if rows were independent: then it is not the span that lacks. */
function wouldDo({ fit, covariance, noise, rows }: CoastEstimate): boolean {
  if (covariance === null || Math.abs(correlationOf(covariance)) > MOST_CORRELATION) return false
  const factor = quantileT(SURE, rows)
  return [fit.load.rollingCoefficient, fit.load.dragAreaM2].every(
    (value, j) => 2 * factor * Math.sqrt(covarianceOf(covariance, j, j) / noise.rowsPerFact) <= WIDEST * value,
  )
}

/** Residuals that drift: the runs hold something that the columns do not. */
function clingingReason({ rows, noise }: CoastEstimate): CoastReason {
  const facts = Math.max(rows / noise.rowsPerFact, 1).toFixed(0)
  return {
    code: 'drifting',
    run: null,
    detail: `what the fit leaves drifts along the runs, so that ${rows} rows tell as much as ${facts} independent ones; expected scatter: wind or slope that is not in the file, brakes or a dragging motor do this`,
  }
}

/** What fall of speed the runs have, and what they would need. */
function spanReason(test: CoastTest, terms: readonly LoadTerm[], estimate: CoastEstimate): CoastReason {
  const starts = test.runs.map((run) => run.speedMps[0])
  const ends = test.runs.map((run) => run.speedMps[run.speedMps.length - 1])
  const mean = (values: number[]): number => values.reduce((a, b) => a + b, 0) / values.length
  const [fromMps, toMps] = [mean(starts), mean(ends)]
  const kmh = (mps: number): string => (mps * 3.6).toFixed(0)
  const span = needed(test, terms, estimate, fromMps, toMps)
  const wanted =
    span === null
      ? 'no wider fall would tell with this noise: log more runs, more often or with a steadier sensor'
      : `about ${kmh(span.fromMps)} down to ${kmh(span.toMps)} km/h would tell, with as many runs and this noise`
  return {
    code: 'narrow-span',
    run: null,
    detail: `the speed falls from ${kmh(fromMps)} to ${kmh(toMps)} km/h, which does not tell rolling from drag; ${wanted}`,
  }
}

function needed(
  test: CoastTest,
  terms: readonly LoadTerm[],
  { varianceMps2, rows }: CoastEstimate,
  fromMps: number,
  toMps: number,
): NeededSpan | null {
  const load = halfEach(test, fromMps, toMps)
  const lastingS = test.runs.reduce((sum, { timeS }) => sum + timeS[timeS.length - 1] - timeS[0], 0)
  const isGood = (covariance: Matrix): boolean =>
    Math.abs(correlationOf(covariance)) <= MOST_CORRELATION &&
    4 * Math.sqrt(covarianceOf(covariance, 0, 0)) <= WIDEST * load.rollingCoefficient &&
    4 * Math.sqrt(covarianceOf(covariance, 1, 1)) <= WIDEST * load.dragAreaM2
  const directions = test.runs.map((run) => run.direction)
  const stepS = lastingS / (rows - test.runs.length)
  const { car, linear } = test
  return neededSpan({ car, directions, load, terms, prior: linear, stepS, varianceMps2 }, fromMps, toMps, isGood)
}

/** A load that decelerates as the runs do, half by rolling and half by the air: all that a narrow span tells. */
function halfEach({ car, linear, runs }: CoastTest, fromMps: number, toMps: number): CoastLoad {
  const [fallMps, lastingS] = runs.reduce(
    ([fall, time], { speedMps, timeS }) => [
      fall + speedMps[0] - speedMps[speedMps.length - 1],
      time + timeS[timeS.length - 1] - timeS[0],
    ],
    [0, 0],
  )
  const forceN = Math.max((car.massKg * car.rotatingFactor * fallMps) / lastingS, 1e-3)
  const meanMps = (fromMps + toMps) / 2
  return {
    rollingCoefficient: forceN / 2 / (car.massKg * car.gravity),
    dragAreaM2: forceN / (car.densityKgM3 * meanMps * meanMps),
    rollingPerMps: linear.rollingPerMps,
    windMps: 0,
    gradeRad: 0,
  }
}
