import { describe, expect, test } from 'vitest'
import type { Course } from '../../server/engine/course.ts'
import { course } from '../../server/engine/course.ts'
import { drivenRoad } from '../../server/engine/driven-road.ts'
import type { Drive } from '../../server/engine/drive.ts'
import { prepareDrive, wheelToBus } from '../../server/engine/drive.ts'
import { airAtCar, meetWeather } from '../../server/engine/motion.ts'
import { newRoadEnergy, roadEnergy } from '../../server/engine/road-energy.ts'
import { kineticJ, prepareRoadLoad, STANDARD_GRAVITY } from '../../server/engine/road.ts'
import { steps } from '../../server/engine/steps.ts'
import { timetable } from '../../server/engine/timetable.ts'

const MPS = 20

const load = prepareRoadLoad({
  massKg: 250,
  rotatingFactor: 1.03,
  dragAreaM2: 0.1,
  rollingCoefficient: 0.0035,
  rollingPerMps: 0,
  gravity: STANDARD_GRAVITY,
})
const drive = prepareDrive({ efficiency: 0.96, regenEfficiency: 0.6, motorMaxW: 5000, motorMaxN: 320, regenMaxW: 600 })

/** A road of 0.1° of longitude along the equator, 11.13 km, that climbs so much. */
const road = (climbM: number): Course =>
  course([
    {
      points: {
        latRad: new Float64Array(2),
        lonRad: new Float64Array([0, 0.1 * (Math.PI / 180)]),
        altM: new Float64Array([0, climbM]),
      },
      stretches: [],
      fromM: 0,
      toM: 11_000,
      roughnessM: 0.03,
      limitMps: 30,
    },
  ])

const bounds = { accelerationMps2: 0.6, brakingMps2: 1 }
const HOUR = 3_600_000
const RULES = {
  opensMs: 0,
  closesMs: 10 * HOUR,
  drivingFromMs: 0,
  drivingToMs: 10 * HOUR,
  charging: [],
  raiseS: 0,
  lowerS: 0,
  lastStage: 0,
}

/** The road driven from end to end, its air of 20 °C and 1.2 kg/m³, wind as given. */
function driven(
  roads: Course,
  speedMps = new Float64Array(roads.pieces.count).fill(MPS),
  wind = { head: 0, cross: 0 },
) {
  const on = drivenRoad({ load, drive, bounds }, roads, speedMps)
  const standing = { stage: 0, placeM: 0, stopLeftS: 0 }
  const stage = { name: 'a', start: 'x', finish: 'y', stop: null }
  const table = timetable(on, [stage], RULES, { dayIndex: 0, standing })
  const cut = steps(roads, table)
  const column = (value: number) => new Float64Array(cut.count).fill(value)
  const air = {
    headwindMps: column(wind.head),
    crosswindMps: column(wind.cross),
    overPanelsMps: column(0),
    densityKgM3: column(1.2),
    airC: column(20),
  }
  return { course: roads, steps: cut, air, on }
}

const energyOf = (day: ReturnType<typeof driven>, i: number, by: Drive = drive) =>
  roadEnergy({ load, drive: by, bounds }, day, i, newRoadEnergy())

/** The first step that passes a place. */
const stepAt = ({ steps: cut }: ReturnType<typeof driven>, placeM: number): number =>
  cut.toM.findIndex((m, i) => m > placeM && cut.fromM[i] <= placeM)

const motionJ = 0.5 * 250 * 1.03 * MPS * MPS

/** Sum of a million moments of one braking at 1 m/s² in which the road helps or not, by hand. [J] */
function brakedByHandJ(roadN: (mps: number) => number, most: { wheelW: number }) {
  const n = 100_000
  const sum = { taken: 0, braked: 0 }
  for (let i = 0; i < n; i++) {
    const v = MPS * (1 - (i + 0.5) / n)
    const wheelW = -(roadN(v) - 250 * 1.03) * v
    sum.taken += (Math.max(Math.min(wheelW, most.wheelW), 0) * MPS) / n
    sum.braked += (Math.max(wheelW - most.wheelW, 0) * MPS) / n
  }
  return sum
}

describe('energy of one step on the road', () => {
  test('climbing takes weight times height, however steep the road', () => {
    const day = driven(road(1100))
    const i = stepAt(day, 3200)
    const { startAltM, endAltM } = day.course.pieces
    const piece = day.steps.piece[i]
    expect(energyOf(day, i).climbingJ).toBeCloseTo(250 * STANDARD_GRAVITY * (endAltM[piece] - startAltM[piece]), 3)
  })

  test('starting takes the motion’s energy from the motor, beside what the road takes', () => {
    const day = driven(road(0))
    const start = energyOf(day, 0)
    expect([day.steps.fromMps[0], day.steps.toMps[0]]).toEqual([0, MPS])
    expect(start.busJ).toBeCloseTo((motionJ + start.rollingJ + start.dragJ) / 0.96, 6)
    // 400/1.2 m of rolling, and of drag half of that at full speed: the square of speed is linear in distance
    expect(start.rollingJ).toBeCloseTo(250 * STANDARD_GRAVITY * 0.0035 * (400 / 1.2), 6)
    expect(start.dragJ).toBeCloseTo((0.5 * (0.5 * 1.2 * 0.1 * 400) * 400) / 1.2, 6)
  })

  test('wind against a car that gains speed: the integral of (v + w)²·v, by hand', () => {
    const day = driven(road(0), undefined, { head: 5, cross: 0 })
    // ∫ ½ρCdA (v + 5)² v dt, v = 0.6 t: (v⁴/4 + 10v³/3 + 25v²/2)/0.6 · 0.06 at 20 m/s
    expect(energyOf(day, 0).dragJ).toBeCloseTo((0.06 * (40_000 + 80_000 / 3 + 5000)) / 0.6, 6)
  })

  test('braking regenerates within the motor’s limit at every moment and brakes the rest', () => {
    const day = driven(road(0))
    const last = day.steps.speedMps.findLastIndex((mps) => mps > 0)
    const stop = energyOf(day, last)
    const byHand = brakedByHandJ((v) => 250 * STANDARD_GRAVITY * 0.0035 + 0.06 * v * v, { wheelW: 1000 })
    expect(-stop.busJ / (byHand.taken * 0.6)).toBeCloseTo(1, 2)
    expect(Math.abs(stop.brakedJ - byHand.braked)).toBeLessThan(0.01 * motionJ)
  })

  test('a halt costs the motion that the brakes and the drive lose: braking by regeneration, starting by the motor', () => {
    const roads = road(0)
    const without = energyOf(driven(roads), 4)
    roads.pieces.haltsPerM[4] = 3 / roads.pieces.lengthM[4]
    const day = driven(roads)
    expect(day.steps.piece[5]).toBe(4)
    const withHalts = energyOf(day, 5)
    const byHand = brakedByHandJ(() => 0, { wheelW: 1000 })
    expect((withHalts.busJ - without.busJ) / (3 * (motionJ / 0.96 - byHand.taken * 0.6))).toBeCloseTo(1, 2)
    expect(Math.abs(withHalts.brakedJ - 3 * byHand.braked)).toBeLessThan(0.02 * motionJ)
  })

  test('no energy is lost or made on the way: the bus gives the road, the brakes, the losses and the motion', () => {
    const roads = road(400)
    const speedMps = Float64Array.from({ length: roads.pieces.count }, (_, i) => 12 + ((i * 7) % 11))
    roads.pieces.haltsPerM[3] = 0.002
    let counted = 0
    for (const wind of [
      { head: 0, cross: 0 },
      { head: 6, cross: 4 },
      { head: -9, cross: 2 },
    ]) {
      const day = driven(roads, speedMps, wind)
      for (let i = 0; day.steps.speedMps[i] > 0; i++) {
        counted++
        const e = energyOf(day, i)
        const gainJ = kineticJ(load, day.steps.toMps[i]) - kineticJ(load, day.steps.fromMps[i])
        expect(e.busJ - e.rollingJ - e.dragJ - e.climbingJ - e.brakedJ - e.lossJ - gainJ).toBeCloseTo(0, 6)
        expect(Math.min(e.brakedJ, e.lossJ)).toBeGreaterThanOrEqual(0)
      }
    }
    expect(counted).toBeGreaterThan(60)
  })

  test('a motor with losses by torque and speed is asked at the force and speed of the step', () => {
    const losses = { kind: 'terms' as const, standingW: 5, frictionN: 0.2, eddyNsM: 0.003, copperWN2: 0.009 }
    const by = prepareDrive({ ...drive, losses })
    const day = driven(road(0))
    const e = energyOf(day, 5, by)
    const wheelN = 250 * STANDARD_GRAVITY * 0.0035 + 0.06 * 400
    const durationS = (day.steps.toMs[5] - day.steps.fromMs[5]) / 1000
    // 5 + 0.2 · 20 + 0.003 · 400 + 0.009 · F²
    expect(e.lossJ / durationS).toBeCloseTo(5 + 4 + 1.2 + 0.009 * wheelN * wheelN, 6)
    expect(wheelToBus(by, wheelN * 20, 20).lossW * durationS).toBeCloseTo(e.lossJ, 3)
  })
})

describe('air and motor along the road', () => {
  test('wind against the car adds to the air over its panels, wind from behind takes away', () => {
    const day = driven(road(0))
    const n = day.steps.count
    const weather = (fromDeg: number) => ({
      windMps: new Float64Array(n).fill(6),
      windFromRad: new Float64Array(n).fill((fromDeg * Math.PI) / 180),
      densityKgM3: new Float64Array(n).fill(1.2),
      airC: new Float64Array(n).fill(20),
    })
    const over = (fromDeg: number) => airAtCar(day.course, day.steps, weather(fromDeg), 0.5).overPanelsMps[2]
    // ln(0.5/0.03)/ln(10/0.03) = 0.4843 of the wind at 10 m
    expect(over(90)).toBeCloseTo(MPS + 6 * 0.4843, 2)
    expect(over(270)).toBeCloseTo(MPS - 6 * 0.4843, 2)
    expect(over(0)).toBeCloseTo(Math.hypot(MPS, 6 * 0.4843), 2)
  })

  test('a rough surface slows a car at its motor’s limit, and only there', () => {
    const roads = road(0)
    roads.pieces.surfaceFactor[6] = 5
    const weak = prepareDrive({ ...drive, motorMaxW: 700 })
    const on = drivenRoad({ load, drive: weak, bounds }, roads, new Float64Array(roads.pieces.count).fill(MPS))
    const slowed = [...on.heldMps].flatMap((mps, i) => (mps < MPS ? [i] : []))
    expect(slowed).toEqual([6])
  })

  test('the weather met changes what the motor can hold, and only a change that counts lays the day out anew', () => {
    const roads = road(0)
    const weak = prepareDrive({ ...drive, motorMaxW: 700 })
    const on = drivenRoad({ load, drive: weak, bounds }, roads, new Float64Array(roads.pieces.count).fill(MPS))
    const day = driven(roads)
    expect(meetWeather(on, day.steps, day.air)).toBe(false)
    expect([...on.heldMps].every((mps) => mps === MPS)).toBe(true)
    day.air.headwindMps.fill(8)
    expect(meetWeather(on, day.steps, day.air)).toBe(true)
    // (8.58 N + 0.06 · (v + 8)²) · v = 700 W: v = 16.11 m/s, by trial
    expect(on.heldMps[4]).toBeCloseTo(16.11, 2)
    expect(meetWeather(on, day.steps, day.air)).toBe(false)
    day.air.headwindMps.fill(0)
    day.air.airC.fill(45)
    const warm = { ...on, load: { ...load, rollingPerC: 0.02 } }
    meetWeather(warm, day.steps, day.air)
    expect(warm.surfaceFactor[4]).toBeCloseTo(0.7, 12)
  })
})
