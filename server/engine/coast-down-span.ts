import { type CoastUnknowns, type LinearPrior, systemAt, termCovariance } from './coast-down-fit.ts'
import { type CoastCar, type CoastLoad, type CoastRun, coastTrace, type LoadTerm } from './coast-down-trace.ts'
import type { Matrix } from './matrix.ts'

/** Beyond this correlation of rolling and drag, either size or neither, the runs do not tell them apart. */
export const MOST_CORRELATION = 0.97

/** Fall of speed that would tell rolling from drag. */
export interface NeededSpan {
  fromMps: number
  toMps: number
}

/** Lowest speed that is proposed, step of the search, and how much faster a start is tried. [m/s] */
const LOWEST_MPS = 10 / 3.6
const STEP_MPS = 5 / 3.6
const FASTER_MPS = [0, 20 / 3.6, 40 / 3.6]
/** Longest run that is proposed. [s] */
const LONGEST_S = 1800

/** What an imagined set of runs has in common. */
interface Design {
  car: CoastCar
  directions: readonly (1 | -1)[]
  load: CoastLoad
  terms: readonly LoadTerm[]
  prior: LinearPrior
  /** Time between rows, and variance of one. */
  stepS: number
  varianceMps2: number
}

/**
 * The smallest fall of speed, from where the runs start or faster, at which as many runs with the same noise and
 * rows as often would tell rolling from drag; null where none would.
 *
 * @param startMps where the runs start. [m/s]
 * @param endMps   where they end. [m/s]
 * @param isGood   whether a covariance of the terms is good enough
 */
export function neededSpan(
  design: Design,
  startMps: number,
  endMps: number,
  isGood: (covariance: Matrix) => boolean,
): NeededSpan | null {
  const stepS = Math.max(design.stepS, 1)
  // Fewer rows that each tell more are as good, and quicker.
  const varianceMps2 = (design.varianceMps2 * design.stepS) / stepS
  const { car, load, terms, prior } = design
  for (const faster of FASTER_MPS) {
    const fromMps = startMps + faster
    for (let toMps = endMps; toMps >= LOWEST_MPS - 1e-9; toMps -= STEP_MPS) {
      const runs = design.directions.map((direction) => imagined({ ...design, stepS }, direction, fromMps, toMps))
      const at: CoastUnknowns = { load, startMps: Float64Array.from(runs, () => fromMps) }
      const { normal } = systemAt(car, runs, terms, at, prior, varianceMps2)
      const covariance = termCovariance(normal, terms.length, varianceMps2)
      if (covariance !== null && isGood(covariance)) return { fromMps, toMps }
    }
  }
  return null
}

/** A run of this load without noise, from one speed down to another. */
function imagined(design: Design, direction: 1 | -1, fromMps: number, toMps: number): CoastRun {
  const timeS = Float64Array.from({ length: Math.ceil(LONGEST_S / design.stepS) }, (_, i) => i * design.stepS)
  const run: CoastRun = { direction, timeS, speedMps: timeS, gradeRad: null, headwindMps: null, crosswindMps: null }
  const { speedMps } = coastTrace(design.car, run, design.load, fromMps, [])
  const end = speedMps.findIndex((speed) => speed < toMps)
  const rows = Math.max(end < 0 ? speedMps.length : end, 2)
  return { ...run, timeS: timeS.slice(0, rows), speedMps: speedMps.slice(0, rows) }
}
