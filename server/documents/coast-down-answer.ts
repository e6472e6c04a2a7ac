import { type CoastFit, type CoastTest, type Estimated, fitCoastDown } from '../engine/coast-down.ts'
import type { CoastReason } from '../engine/coast-down-check.ts'
import { REFERENCE_C, REFERENCE_KG_M3, REFERENCE_PA, referenceLoad, windBiasN } from '../engine/coast-down-reference.ts'
import { tyreFactor } from '../engine/road.ts'
import { thinnedRows } from '../engine/coast-down-thin.ts'
import type { CarDocument } from './car.ts'
import type { CoastDownRequest } from './coast-down.ts'
import { coastModel } from './coast-down-model.ts'
import type { CoastDownDocument } from './coast-down-result.ts'
import { coastWarnings } from './coast-down-warnings.ts'
import type { Problem } from './problem.ts'

const KMH = 3.6
/** Most rows of a run in a picture. */
const MOST_SHOWN = 300
const HOLDING_KMH = [40, 60, 80, 100]

/** A stored car with the version that was read. */
export interface TestCar {
  id: string
  version: number
  document: CarDocument
}

/** What the runs tell, or why they tell nothing. */
export type CoastDownAnswer =
  | { result: CoastDownDocument; refused?: undefined }
  | { result?: undefined; refused: Problem[] }

/** Rolling and drag from a test, or every reason why its runs do not identify them. */
export function coastDownAnswer(request: CoastDownRequest, car: TestCar | null): CoastDownAnswer {
  const { test, leftOut } = coastModel(request, car?.document.body ?? null)
  const fit = fitCoastDown(test)
  if (fit.kind === 'refused') return { refused: fit.reasons.map((reason) => problemOf(reason, request)) }
  const { massKg, rotatingFactor, densityKgM3 } = test.car
  const result = {
    car: car === null ? null : { id: car.id, version: car.version, name: car.document.name },
    massKg,
    rotatingFactor,
    densityKgM3,
    temperatureC: request.air.temperatureC ?? null,
    rollingCoefficient: fit.rollingCoefficient,
    dragAreaM2: fit.dragAreaM2,
    rollingPerKmh: linearOf(fit),
    correlation: fit.correlation,
    wind: windOf(request, test, fit),
    grade: gradeOf(request, test, fit),
    noise: {
      kmh: fit.noiseMps * KMH,
      rows: fit.rows,
      independentRows: fit.rows / fit.noise.rowsPerFact,
      lagOneCorrelation: fit.noise.lagOne,
      isWhite: fit.noise.isWhite,
    },
    reference: referenceOf(test, fit, tyresOf(request, car)),
    runs: test.runs.map((_, r) => runOf(request, test, fit, r)),
  }
  return { result: { ...result, warnings: coastWarnings(result, fit, leftOut) } }
}

/** A reason by the run that it is about. */
function problemOf({ run, detail }: CoastReason, { runs }: CoastDownRequest): Problem {
  if (run === null) return { field: 'runs', detail }
  return { field: `runs[${run}]`, detail: `${nameOf(runs, run)}: ${detail}` }
}

const nameOf = (runs: CoastDownRequest['runs'], r: number): string =>
  runs[r].name ?? `run ${r + 1}, ${runs[r].direction}`

function linearOf({ rollingPerMps, linearPerMps }: CoastFit): CoastDownDocument['rollingPerKmh'] {
  const { value, sd, low, high } = rollingPerMps ?? {
    value: linearPerMps,
    sd: 0,
    low: linearPerMps,
    high: linearPerMps,
  }
  const held = rollingPerMps === null
  return { value: value / KMH, sd: sd / KMH, low: low / KMH, high: high / KMH, isHeld: held }
}

/** Mean of a column over all rows, each turned to the way there; 0 without one. */
function meanThere(test: CoastTest, columnOf: (run: CoastTest['runs'][number]) => Float64Array | null): number {
  const [sum, rows] = test.runs.reduce(
    ([total, count], run) => {
      const column = columnOf(run) ?? new Float64Array(0)
      return [total + run.direction * column.reduce((a, b) => a + b, 0), count + column.length]
    },
    [0, 0],
  )
  return rows === 0 ? 0 : sum / rows
}

const sourceOf = (found: Estimated | null, stated: number | undefined): 'found' | 'stated' | 'measured' =>
  found !== null ? 'found' : stated !== undefined ? 'stated' : 'measured'

function windOf(request: CoastDownRequest, test: CoastTest, fit: CoastFit): CoastDownDocument['wind'] {
  const alongMps = fit.windMps?.value ?? meanThere(test, (run) => run.headwindMps)
  const across = test.runs.flatMap((run) => (run.crosswindMps === null ? [] : [...run.crosswindMps]))
  const biasN = windBiasN(test.car, fit.dragAreaM2.value, alongMps)
  const rollingN = test.car.massKg * test.car.gravity * fit.rollingCoefficient.value
  return {
    source: sourceOf(fit.windMps, request.windAlongMps),
    alongMps,
    alongSdMps: fit.windMps?.sd ?? 0,
    acrossMps: across.length === 0 ? null : across.reduce((sum, mps) => sum + Math.abs(mps), 0) / across.length,
    biasN,
    biasPct: (100 * biasN) / rollingN,
  }
}

function gradeOf(request: CoastDownRequest, test: CoastTest, fit: CoastFit): CoastDownDocument['grade'] {
  const gradeRad = fit.gradeRad?.value ?? meanThere(test, (run) => run.gradeRad)
  const source = sourceOf(fit.gradeRad, request.gradePct)
  return { source, pct: 100 * Math.tan(gradeRad), sdPct: 100 * (fit.gradeRad?.sd ?? 0) }
}

/** Rolling at the reference's temperature over rolling on the day; 1 where nothing is known of it. */
function tyresOf({ rollingPctPerC, air }: CoastDownRequest, car: TestCar | null): number {
  const rollingPerC = (rollingPctPerC ?? car?.document.body.rollingPctPerC ?? 0) / 100
  return 1 / tyreFactor({ rollingPerC, rollingAtC: REFERENCE_C }, air.temperatureC ?? REFERENCE_C)
}

function referenceOf(test: CoastTest, fit: CoastFit, tyres: number): CoastDownDocument['reference'] {
  const { F0, F0Sd, F1, F2, F2Sd } = referenceLoad(test.car, fit, tyres)
  return {
    temperatureC: REFERENCE_C,
    pressureHpa: REFERENCE_PA / 100,
    densityKgM3: REFERENCE_KG_M3,
    rollingFactor: tyres,
    F0N: F0,
    F0SdN: F0Sd,
    F1NPerKmh: F1 / KMH,
    F2NPerKmh2: F2 / KMH ** 2,
    F2SdNPerKmh2: F2Sd / KMH ** 2,
    holding: HOLDING_KMH.map((speedKmh) => {
      const mps = speedKmh / KMH
      const forceN = F0 + F1 * mps + F2 * mps * mps
      return { speedKmh, forceN, powerW: forceN * mps }
    }),
  }
}

function runOf(
  request: CoastDownRequest,
  test: CoastTest,
  fit: CoastFit,
  r: number,
): CoastDownDocument['runs'][number] {
  const { timeS, speedMps } = test.runs[r]
  const left = fit.residuals[r]
  const shown = thinnedRows(left, MOST_SHOWN)
  const of = (value: (i: number) => number): number[] => shown.map(value)
  return {
    name: nameOf(request.runs, r),
    direction: request.runs[r].direction,
    rows: timeS.length,
    fromKmh: speedMps[0] * KMH,
    toKmh: speedMps[speedMps.length - 1] * KMH,
    timeS: of((i) => timeS[i]),
    measuredKmh: of((i) => speedMps[i] * KMH),
    fittedKmh: of((i) => (speedMps[i] - left[i]) * KMH),
    residualKmh: of((i) => left[i] * KMH),
  }
}
