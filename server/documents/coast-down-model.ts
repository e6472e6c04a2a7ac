import { airDensityKgM3, vapourFromHumidityPa } from '../engine/air.ts'
import type { CoastTest } from '../engine/coast-down.ts'
import type { CoastRun } from '../engine/coast-down-trace.ts'
import { STANDARD_GRAVITY } from '../engine/road.ts'
import type { CoastDownRequest, CoastRunDocument } from './coast-down.ts'
import type { CarDocument } from './car.ts'

const KMH = 1 / 3.6

/** Below this speed a run is not read: rolling, sensors and standing still are another matter there. (ours) [km/h] */
export const LEAST_KMH = 5

/** Density of the air at the test. [kg/m³] */
export function testDensityKgM3({
  temperatureC = 0,
  pressureHpa = 0,
  humidityPct,
  densityKgM3,
}: CoastDownRequest['air']): number {
  if (densityKgM3 !== undefined) return densityKgM3
  return airDensityKgM3(pressureHpa * 100, temperatureC, vapourFromHumidityPa(temperatureC, humidityPct / 100))
}

/** The test as the engine takes it, and how many rows at the slow ends were left out. */
export function coastModel(request: CoastDownRequest, body: CarDocument['body'] | null) {
  const runs = request.runs.map((run) => runModel(run, request))
  const leftOut = request.runs.reduce((sum, { timeS }, i) => sum + timeS.length - runs[i].timeS.length, 0)
  const test: CoastTest = {
    car: {
      massKg: request.massKg ?? body?.massKg ?? Number.NaN,
      rotatingFactor: request.rotatingFactor ?? body?.rotatingFactor ?? 1.03,
      gravity: STANDARD_GRAVITY,
      densityKgM3: testDensityKgM3(request.air),
    },
    linear: {
      rollingPerMps: (request.rollingPerKmh ?? body?.rollingPerKmh ?? 0) / KMH,
      sdPerMps: request.rollingPerKmhSd / KMH,
    },
    runs,
  }
  return { test, leftOut }
}

function runModel(run: CoastRunDocument, { gradePct, windAlongMps }: CoastDownRequest): CoastRun {
  const direction = run.direction === 'there' ? 1 : -1
  const slow = run.speedKmh.findIndex((speed) => speed < LEAST_KMH)
  const rows = slow < 0 ? run.timeS.length : slow
  const column = (values: number[] | undefined, steady: number | undefined, unit: (v: number) => number) => {
    if (values !== undefined) return Float64Array.from(values.slice(0, rows), unit)
    return steady === undefined ? null : new Float64Array(rows).fill(unit(direction * steady))
  }
  return {
    direction,
    // From the run's own start: an epoch's milliseconds would cost digits.
    timeS: Float64Array.from(run.timeS.slice(0, rows), (time) => time - run.timeS[0]),
    speedMps: Float64Array.from(run.speedKmh.slice(0, rows), (speed) => speed * KMH),
    gradeRad: column(run.gradePct, gradePct, (pct) => Math.atan(pct / 100)),
    headwindMps: column(run.headwindMps, windAlongMps, (mps) => mps),
    crosswindMps: column(run.crosswindMps, undefined, (mps) => mps),
  }
}
