import type { CoastTest } from '../../server/engine/coast-down.ts'
import type { CoastCar, CoastRun } from '../../server/engine/coast-down-trace.ts'
import { LEVEL, LOAD } from './invented-car.ts'
import { normalFrom, seeded } from './seeded.ts'

/** The invented car in air of 1.17 kg/m³. */
export const CAR: CoastCar = {
  massKg: LOAD.massKg,
  rotatingFactor: LOAD.rotatingFactor,
  gravity: LOAD.gravity,
  densityKgM3: LEVEL.densityKgM3,
}

export interface Coasting {
  car?: CoastCar
  rollingCoefficient?: number
  dragAreaM2?: number
  rollingPerMps?: number
  windMps?: number
  grade?: number
  fromKmh?: number
  toKmh?: number
  stepS?: number
  noiseMps?: number
}

/**
 * Speed of a car that coasts against a + b·v + c·v², by the closed form of its equation of motion: with q² = ac − b²/4
 * above 0, v = (q/c)·tan(arctan((c·v0 + b/2)/q) − q·t/m) − b/(2c). Worked by hand; the engine integrates instead.
 */
export function coastingMps(massKg: number, [a, b, c]: readonly number[], startMps: number, timeS: number): number {
  const q = Math.sqrt(a * c - (b * b) / 4)
  return (q / c) * Math.tan(Math.atan((c * startMps + b / 2) / q) - (q * timeS) / massKg) - b / (2 * c)
}

/** A run of that car, its wind along the road and its slope the same all the way, with noise drawn from a seed. */
export function coastRun(direction: 1 | -1, coasting: Coasting = {}, normal: () => number = () => 0): CoastRun {
  const { car = CAR, rollingCoefficient = LOAD.rollingCoefficient, dragAreaM2 = LOAD.dragAreaM2 } = coasting
  const { windMps = 0, grade = 0, rollingPerMps = 0 } = coasting
  const { fromKmh = 80, toKmh = 12, stepS = 1, noiseMps = 0 } = coasting
  const weightN = car.massKg * car.gravity
  const slope = direction * Math.atan(grade)
  const wind = direction * windMps
  const half = 0.5 * car.densityKgM3 * dragAreaM2
  const force = [
    weightN * (Math.cos(slope) * rollingCoefficient + Math.sin(slope)) + half * wind * wind,
    weightN * Math.cos(slope) * rollingPerMps + 2 * half * wind,
    half,
  ]
  const [time, speed]: number[][] = [[], []]
  for (let i = 0; ; i++) {
    const mps = coastingMps(car.massKg * car.rotatingFactor, force, fromKmh / 3.6, i * stepS)
    if (mps < toKmh / 3.6) break
    if (Number.isNaN(mps)) throw new Error('no coast-down: the slope or the wind pulls harder than rolling')
    time.push(i * stepS)
    speed.push(mps + noiseMps * normal())
  }
  return {
    direction,
    timeS: Float64Array.from(time),
    speedMps: Float64Array.from(speed),
    gradeRad: null,
    headwindMps: null,
    crosswindMps: null,
  }
}

/**
 * A run in still air over a road whose slope is known by the time, in Euler steps of 1/100 s: a way of its own, good
 * to some 1e-4. The slope is that in the direction of the run, a straight line between seconds.
 */
export function slopingRun(direction: 1 | -1, gradeAt: (timeS: number) => number, toKmh = 12): CoastRun {
  const { massKg, rotatingFactor, gravity, densityKgM3 } = CAR
  const [time, speeds]: number[][] = [[], []]
  let speed = 80 / 3.6
  for (let i = 0; speed > toKmh / 3.6; i++) {
    time.push(i)
    speeds.push(speed)
    for (let k = 0; k < 100; k++) {
      const slope = Math.atan(gradeAt(i)) * (1 - k / 100) + Math.atan(gradeAt(i + 1)) * (k / 100)
      const rolling = LOAD.rollingCoefficient * Math.cos(slope) + Math.sin(slope)
      const forceN = massKg * gravity * rolling + 0.5 * densityKgM3 * LOAD.dragAreaM2 * speed * speed
      speed -= (forceN / (massKg * rotatingFactor)) * 0.01
    }
  }
  const timeS = Float64Array.from(time)
  const gradeRad = timeS.map((at) => Math.atan(gradeAt(at)))
  const calm = { headwindMps: timeS.map(() => 0), crosswindMps: null }
  return { direction, timeS, speedMps: Float64Array.from(speeds), gradeRad, ...calm }
}

export const testOf = (runs: CoastRun[], car: CoastCar = CAR): CoastTest => ({
  car,
  linear: { rollingPerMps: 0, sdPerMps: 0 },
  runs,
})

/** Two runs there and two back. */
export const bothWays = (coasting: Coasting = {}, seed = 1): CoastRun[] => {
  const normal = normalFrom(seeded(seed))
  return ([1, -1, 1, -1] as const).map((direction) => coastRun(direction, coasting, normal))
}

/** The same run with its slope and wind measured. */
export const measured = (run: CoastRun, grade: number, windMps: number): CoastRun => ({
  ...run,
  gradeRad: run.timeS.map(() => run.direction * Math.atan(grade)),
  headwindMps: run.timeS.map(() => run.direction * windMps),
})
