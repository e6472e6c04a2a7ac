import { InputError } from './input-error.ts'

/** One logged run with the drive disengaged. The optional columns are of the length of the others. */
export interface CoastRun {
  /** 1 there, −1 back over the same road. */
  direction: 1 | -1
  /** Rising. */
  timeS: Float64Array
  /** Over the ground. */
  speedMps: Float64Array
  /** Slope in the direction of this run, up positive; null where it was not measured. */
  gradeRad: Float64Array | null
  /** Wind at the car against this run, positive; null where it was not measured. */
  headwindMps: Float64Array | null
  crosswindMps: Float64Array | null
}

/** The car and the air that the runs were made in. */
export interface CoastCar {
  massKg: number
  /** Equivalent mass with what turns over mass. */
  rotatingFactor: number
  gravity: number
  densityKgM3: number
}

/** What slows a coasting car: the terms of road.ts, and the steady wind and slope that nobody measured. */
export interface CoastLoad {
  rollingCoefficient: number
  dragAreaM2: number
  /** Added to the rolling coefficient for each m/s. */
  rollingPerMps: number
  /** Steady wind against the runs there, which pushes those back; 0 where the wind was measured. */
  windMps: number
  /** Steady slope of the road, up on the way there; 0 where the slope was measured. */
  gradeRad: number
}

/** The terms in the order in which slopes and covariances list them. */
export const LOAD_TERMS = ['rollingCoefficient', 'dragAreaM2', 'rollingPerMps', 'windMps', 'gradeRad'] as const
export type LoadTerm = (typeof LOAD_TERMS)[number]

/** Speeds of a run as a load gives them, and how they change with each term asked for and with the start speed. */
export interface CoastTrace {
  speedMps: Float64Array
  /** Row by row: one slope for each term asked for, then that for the start speed (rows × (terms + 1)). */
  slopes: Float64Array
}

/** Longest step of the integration. [s] */
const LONGEST_STEP_S = 1

/** Deceleration and its slopes at one instant; filled anew at each stage. */
interface Instant {
  accelerationMps2: number
  perMps: number
  /** By LOAD_TERMS. */
  perTerm: Float64Array
}

/**
 * Speeds of a coasting car along a run's times: m·k·dv/dt = −(rolling + air + slope), forces as in road.ts.
 *
 * Runge–Kutta of fourth order, in steps of 1 s at most, for the speed and its sensitivities together; slope and
 * wind are straight lines between rows.
 *
 * @param startMps speed at the run's first time. [m/s]
 * @param terms    which slopes are wanted
 * @throws InputError when the start or a term is no number
 * @source Newton's law; sensitivity equations of an ordinary differential equation (common practice)
 */
export function coastTrace(
  car: CoastCar,
  run: CoastRun,
  load: CoastLoad,
  startMps: number,
  terms: readonly LoadTerm[],
): CoastTrace {
  if (!Number.isFinite(startMps))
    throw new InputError('not-a-number', 'startMps', `${startMps} given, a speed expected`)
  const width = terms.length + 1
  const { length } = run.timeS
  const trace = { speedMps: new Float64Array(length), slopes: new Float64Array(length * width) }
  const stepper = newStepper(car, run, load, terms)
  const { state } = stepper
  state[0] = startMps
  state[width] = 1
  for (let i = 0; i < length; i++) {
    if (i > 0) stepper.toRow(i)
    trace.speedMps[i] = state[0]
    for (let j = 0; j < width; j++) trace.slopes[i * width + j] = state[j + 1]
  }
  return trace
}

/** Carries a state (speed, then its slopes) from row to row. */
function newStepper(car: CoastCar, run: CoastRun, load: CoastLoad, terms: readonly LoadTerm[]) {
  const size = terms.length + 2
  const places = Uint8Array.from(terms, (term) => LOAD_TERMS.indexOf(term))
  const instant: Instant = { accelerationMps2: 0, perMps: 0, perTerm: new Float64Array(LOAD_TERMS.length) }
  const [state, at, rate, sum] = [0, 0, 0, 0].map(() => new Float64Array(size))
  /** Rates of the state `at`, at a share of the way from row i − 1 to row i. */
  const derive = (i: number, share: number): void => {
    decelerate(car, run, load, at[0], i, share, instant)
    rate[0] = instant.accelerationMps2
    for (let j = 1; j < size; j++) rate[j] = instant.perMps * at[j]
    for (let j = 0; j < places.length; j++) rate[j + 1] += instant.perTerm[places[j]]
  }
  const step = (i: number, from: number, share: number, stepS: number): void => {
    at.set(state)
    sum.fill(0)
    for (let stage = 0; stage < 4; stage++) {
      derive(i, from + share * STAGE_AT[stage])
      for (let j = 0; j < size; j++) {
        sum[j] += STAGE_WEIGHT[stage] * rate[j]
        at[j] = state[j] + stepS * STAGE_NEXT[stage] * rate[j]
      }
    }
    for (let j = 0; j < size; j++) state[j] += stepS * sum[j]
  }
  return {
    state,
    toRow(i: number): void {
      const gapS = run.timeS[i] - run.timeS[i - 1]
      const steps = Math.max(1, Math.ceil(gapS / LONGEST_STEP_S))
      for (let k = 0; k < steps; k++) step(i, k / steps, 1 / steps, gapS / steps)
    },
  }
}

/** The classical tableau of Runge and Kutta. */
const STAGE_AT = [0, 0.5, 0.5, 1]
const STAGE_WEIGHT = [1 / 6, 1 / 3, 1 / 3, 1 / 6]
const STAGE_NEXT = [0.5, 0.5, 1, 0]

function decelerate(
  car: CoastCar,
  run: CoastRun,
  load: CoastLoad,
  speedMps: number,
  i: number,
  share: number,
  into: Instant,
): void {
  const { direction } = run
  const gradeRad = direction * load.gradeRad + between(run.gradeRad, i, share)
  const along = speedMps + direction * load.windMps + between(run.headwindMps, i, share)
  const cross = between(run.crosswindMps, i, share)
  const relative = Math.sqrt(along * along + cross * cross)
  const perKg = -1 / (car.massKg * car.rotatingFactor)
  const weightN = car.massKg * car.gravity
  const [cos, sin] = [Math.cos(gradeRad), Math.sin(gradeRad)]
  const coefficient = load.rollingCoefficient + load.rollingPerMps * speedMps
  const half = 0.5 * car.densityKgM3
  const airSlope = half * load.dragAreaM2 * (relative > 0 ? relative + (along * along) / relative : 0)
  into.accelerationMps2 = perKg * (weightN * (cos * coefficient + sin) + half * load.dragAreaM2 * relative * along)
  into.perMps = perKg * (weightN * cos * load.rollingPerMps + airSlope)
  into.perTerm[0] = perKg * weightN * cos
  into.perTerm[1] = perKg * half * relative * along
  into.perTerm[2] = perKg * weightN * cos * speedMps
  into.perTerm[3] = perKg * airSlope * direction
  into.perTerm[4] = perKg * weightN * direction * (cos - sin * coefficient)
}

/** A column between rows i − 1 and i; 0 where there is none. */
const between = (column: Float64Array | null, i: number, share: number): number =>
  column === null ? 0 : column[i - 1] + share * (column[i] - column[i - 1])
