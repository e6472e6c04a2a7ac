import type { CoastUnknowns } from './coast-down-fit.ts'
import type { CoastCar, CoastRun } from './coast-down-trace.ts'

/**
 * A start for the fit: decelerations over tenths of each run, by least squares onto a constant and the square of
 * the speed; where those do not part them, half of the mean force each.
 */
export function firstGuess(car: CoastCar, runs: readonly CoastRun[], rollingPerMps: number): CoastUnknowns {
  const weightN = car.massKg * car.gravity
  const half = 0.5 * car.densityKgM3
  let [s11, s12, s22, y1, y2, rows] = [0, 0, 0, 0, 0, 0]
  for (const run of runs) {
    for (const [i, j] of tenths(run)) {
      const speed = (run.speedMps[i] + run.speedMps[j]) / 2
      const along = speed + (run.headwindMps?.[i] ?? 0)
      const fall = (run.speedMps[i] - run.speedMps[j]) / (run.timeS[j] - run.timeS[i])
      const forceN =
        car.massKg * car.rotatingFactor * fall - weightN * (Math.sin(run.gradeRad?.[i] ?? 0) + rollingPerMps * speed)
      const air = half * along * Math.abs(along)
      s11 += weightN * weightN
      s12 += weightN * air
      s22 += air * air
      y1 += weightN * forceN
      y2 += air * forceN
      rows++
    }
  }
  const determinant = s11 * s22 - s12 * s12
  let rollingCoefficient = (s22 * y1 - s12 * y2) / determinant
  let dragAreaM2 = (s11 * y2 - s12 * y1) / determinant
  if (!(rollingCoefficient > 0 && dragAreaM2 > 0 && dragAreaM2 < Infinity)) {
    rollingCoefficient = Math.max(y1 / (2 * s11), 1e-4)
    dragAreaM2 = Math.max(y2 / (2 * s22), 1e-3)
  }
  const load = { rollingCoefficient, dragAreaM2, rollingPerMps, windMps: 0, gradeRad: 0 }
  return { load, startMps: Float64Array.from(runs, (run) => run.speedMps[0]) }
}

/** First and last rows of the tenths of a run. */
function tenths({ timeS }: CoastRun): [number, number][] {
  const stride = Math.max(1, Math.floor((timeS.length - 1) / 10))
  const pairs: [number, number][] = []
  for (let i = 0; i + stride < timeS.length; i += stride) pairs.push([i, i + stride])
  return pairs
}
