import { checkRun, type CoastReason, runReasons } from './coast-down-check.ts'
import { correlationOf, covarianceOf, doubtsOf, SURE } from './coast-down-doubts.ts'
import { type CoastEstimate, estimateTerms } from './coast-down-estimate.ts'
import type { LinearPrior } from './coast-down-fit.ts'
import type { ResidualNoise } from './coast-down-noise.ts'
import { type CoastCar, type CoastRun, LOAD_TERMS, type LoadTerm } from './coast-down-trace.ts'
import { InputError } from './input-error.ts'
import { quantileT } from './student-t.ts'

/** Logged runs with all that is known beside them. */
export interface CoastTest {
  car: CoastCar
  /** Linear rolling term; fixed where sd is 0. */
  linear: LinearPrior
  runs: readonly CoastRun[]
}

/** A number found, its standard error, and the interval that holds it 95 times in 100. */
export interface Estimated {
  value: number
  sd: number
  low: number
  high: number
}

/** What the runs tell. */
export interface CoastFit {
  kind: 'fit'
  rollingCoefficient: Estimated
  dragAreaM2: Estimated
  /** null where it was held fixed. */
  rollingPerMps: Estimated | null
  /** Steady wind against the runs there; null where the wind was measured. [m/s] */
  windMps: Estimated | null
  /** Steady slope on the way there; null where it was measured. [rad] */
  gradeRad: Estimated | null
  /** Held value of the linear term, found or fixed. [s/m] */
  linearPerMps: number
  /** Of rolling and drag, −1..1. */
  correlation: number
  noise: ResidualNoise
  noiseMps: number
  rows: number
  dof: number
  /** By run. [m/s] */
  residuals: Float64Array[]
}

/** Runs that do not tell rolling from drag, and why. */
export interface CoastRefusal {
  kind: 'refused'
  reasons: CoastReason[]
}

/**
 * Rolling coefficient and drag area of a car from runs in which it coasted.
 *
 * m·k·dv/dt = −(m·g·(cos θ·(c0 + c1·v) + sin θ) + ½ρCdA·|v_rel|·v_along), forces as in road.ts, integrated along each
 * run and brought to the logged speeds by least squares over all runs together. Each run's start speed is found
 * too; a steady wind and a steady slope along the road are found where they were not measured, which takes runs
 * both ways. Wind squared pushes both ways alike, so leaving it out would raise rolling by ½ρCdA·w².
 *
 * @param test masses in kg, density in kg/m³; slope measured in all runs or none, and so the wind
 * @returns the fit, or the reasons why these runs identify nothing
 * @throws InputError naming the number that is wrong
 * @source 40 CFR 1066.310 and SAE J1263, J2263 (road-load equation, both directions); fit of speeds: ours
 */
export function fitCoastDown(test: CoastTest): CoastFit | CoastRefusal {
  checkTest(test)
  const isLevelKnown = test.runs.every((run) => run.gradeRad !== null)
  const isWindKnown = test.runs.every((run) => run.headwindMps !== null)
  const reasons = runReasons(test.car, test.runs, { isLevelKnown, isWindKnown })
  if (reasons.length > 0) return { kind: 'refused', reasons }
  const terms = LOAD_TERMS.filter(
    (term) =>
      (term !== 'rollingPerMps' || test.linear.sdPerMps > 0) &&
      (term !== 'windMps' || !isWindKnown) &&
      (term !== 'gradeRad' || !isLevelKnown),
  )
  const estimate = estimateTerms(test.car, test.runs, terms, test.linear)
  const doubts = doubtsOf(test, terms, estimate)
  return doubts.length > 0 ? { kind: 'refused', reasons: doubts } : fitOf(terms, estimate)
}

function checkTest({ car, linear, runs }: CoastTest): void {
  const check = (field: string, value: number, least: number, most: number): void => {
    if (value >= least && value <= most) return
    throw new InputError('out-of-range', field, `${value} given, ${least} to ${most} expected`)
  }
  check('car.massKg', car.massKg, 1, 1e6)
  check('car.rotatingFactor', car.rotatingFactor, 1, 2)
  check('car.gravity', car.gravity, 1, 100)
  check('car.densityKgM3', car.densityKgM3, 0.1, 10)
  check('linear.rollingPerMps', linear.rollingPerMps, -1, 1)
  check('linear.sdPerMps', linear.sdPerMps, 0, 1)
  if (runs.length === 0) throw new InputError('too-few', 'runs', '0 given, at least 1 expected')
  runs.forEach(checkRun)
  for (const name of ['gradeRad', 'headwindMps'] as const) {
    const r = runs.findIndex((run) => (run[name] === null) !== (runs[0][name] === null))
    if (r >= 0) throw new InputError('ambiguous', `runs[${r}].${name}`, 'expected in every run, or in none')
  }
}

function fitOf(terms: readonly LoadTerm[], { fit, covariance, noise, noiseMps, rows, dof }: CoastEstimate): CoastFit {
  if (covariance === null) throw new InputError('not-identified', 'runs', 'terms that the runs tell apart expected')
  const factor = quantileT(SURE, dof)
  const of = (term: LoadTerm): Estimated | null => {
    const j = terms.indexOf(term)
    if (j < 0) return null
    const [value, sd] = [fit.load[term], Math.sqrt(covarianceOf(covariance, j, j))]
    return { value, sd, low: value - factor * sd, high: value + factor * sd }
  }
  const found = (term: LoadTerm): Estimated =>
    of(term) ?? { value: fit.load[term], sd: 0, low: fit.load[term], high: fit.load[term] }
  return {
    kind: 'fit',
    rollingCoefficient: found('rollingCoefficient'),
    dragAreaM2: found('dragAreaM2'),
    rollingPerMps: of('rollingPerMps'),
    windMps: of('windMps'),
    gradeRad: of('gradeRad'),
    linearPerMps: fit.load.rollingPerMps,
    correlation: correlationOf(covariance),
    noise,
    noiseMps,
    rows,
    dof,
    residuals: fit.residuals,
  }
}
