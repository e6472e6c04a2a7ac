import { fitCoastDown } from '../../dist/server/engine/coast-down.js'

const CAR = { massKg: 250, rotatingFactor: 1.03, gravity: 9.80665, densityKgM3: 1.17 }
const ROLLING = 0.0035
const DRAG_M2 = 0.1
const WIND_MPS = 2
const ROUNDS = 15

/** A run of the invented car by the closed form of its equation, with some scatter that is the same every time. */
function run(direction, stepS, shift) {
  const wind = direction * WIND_MPS
  const c = 0.5 * CAR.densityKgM3 * DRAG_M2
  const a = CAR.massKg * CAR.gravity * ROLLING + c * wind * wind
  const b = 2 * c * wind
  const q = Math.sqrt(a * c - (b * b) / 4)
  const start = Math.atan(((c * 80) / 3.6 + b / 2) / q)
  const [timeS, speedMps] = [[], []]
  for (let i = 0; ; i++) {
    const speed = (q / c) * Math.tan(start - (q * i * stepS) / (CAR.massKg * CAR.rotatingFactor)) - b / (2 * c)
    if (speed < 4) break
    timeS.push(i * stepS)
    const scatter = Math.sin((i + shift) * 12.9898) * 43758.5453
    speedMps.push(speed + 0.1 * (scatter - Math.floor(scatter) - 0.5))
  }
  const unknown = { gradeRad: null, headwindMps: null, crosswindMps: null }
  return { direction, timeS: Float64Array.from(timeS), speedMps: Float64Array.from(speedMps), ...unknown }
}

/** Time of a fit of so many runs, half of them each way; refuses figures that are not those of the car. */
export function coastBench(runs, stepS) {
  const linear = { rollingPerMps: 0, sdPerMps: 0 }
  const test = { car: CAR, linear, runs: Array.from({ length: runs }, (_, r) => run(r % 2 ? -1 : 1, stepS, 7919 * r)) }
  const times = []
  let rows = 0
  for (let round = 0; round < ROUNDS; round++) {
    const from = performance.now()
    const fit = fitCoastDown(test)
    times.push(performance.now() - from)
    if (fit.kind !== 'fit') throw new Error(fit.reasons[0].detail)
    const { low, high } = fit.dragAreaM2
    if (!(high - low < 0.01 && Math.abs(fit.dragAreaM2.value - DRAG_M2) < high - low))
      throw new Error('a wrong drag area')
    rows = fit.rows
  }
  return { ms: times.sort((x, y) => x - y)[Math.floor(ROUNDS / 2)], rows }
}
