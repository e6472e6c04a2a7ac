import { describe, expect, test } from 'vitest'
import type { Course } from '../../server/engine/course.ts'
import { course } from '../../server/engine/course.ts'
import { airAtCar, limitByMotor, pieceTimesS } from '../../server/engine/motion.ts'
import { newRoadEnergy, roadEnergy } from '../../server/engine/road-energy.ts'
import { prepareDrive } from '../../server/engine/drive.ts'
import { prepareRoadLoad, STANDARD_GRAVITY } from '../../server/engine/road.ts'
import { steps } from '../../server/engine/steps.ts'
import type { Span } from '../../server/engine/timetable.ts'

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

/** The road driven at one speed from end to end, its air calm and of 1.2 kg/m³. */
function driven(roads: Course, speedMps = new Float64Array(roads.pieces.count).fill(MPS)) {
  const pieceS = pieceTimesS(roads, speedMps)
  const toMs = pieceS.reduce((sum, s) => sum + s * 1000, 0)
  const toM = roads.lengthM
  const flat = { liftedFromMs: 0, liftedToMs: 0 }
  const spans: Span[] = [{ kind: 'drive', stage: 0, fromMs: 0, toMs, fromM: 0, toM, piece: 0, ...flat }]
  const cut = steps(roads, spans, speedMps, pieceS)
  const calm = new Float64Array(cut.count)
  const air = {
    headwindMps: calm,
    crosswindMps: calm,
    overPanelsMps: calm,
    densityKgM3: new Float64Array(cut.count).fill(1.2),
    airC: new Float64Array(cut.count).fill(20),
  }
  return { course: roads, steps: cut, air }
}

const step = (day: ReturnType<typeof driven>, index: number, beforeMps = MPS, endsInHalt = false) =>
  roadEnergy(
    { load, drive },
    day,
    { index, durationS: (day.steps.toMs[index] - day.steps.fromMs[index]) / 1000, beforeMps, endsInHalt },
    newRoadEnergy(),
  )

const motionJ = 0.5 * 250 * 1.03 * MPS * MPS

describe('energy of one step on the road', () => {
  test('climbing takes weight times height, however steep the road', () => {
    const day = driven(road(1100))
    const riseM = day.course.pieces.endAltM[3] - day.course.pieces.startAltM[3]
    expect(step(day, 3).climbingJ).toBeCloseTo(250 * STANDARD_GRAVITY * riseM, 3)
  })

  test('a halt costs the motion that the brakes and the drive lose: braking by regeneration, starting by the motor', () => {
    const roads = road(0)
    const without = step(driven(roads), 4)
    roads.pieces.haltsPerM[4] = 3 / roads.pieces.lengthM[4]
    const withHalts = step(driven(roads), 4)
    // 600 W reach the bus at most: 1000 W at the wheels for the 20 s of each braking.
    const regainedJ = 20 * 600
    expect(withHalts.busJ - without.busJ).toBeCloseTo(3 * (motionJ / 0.96 - regainedJ), 3)
    expect(withHalts.brakedJ).toBeCloseTo(3 * (motionJ - regainedJ / 0.6), 3)
  })

  test('slowing down in a short step regenerates over the time that it really takes', () => {
    const roads = road(0)
    const speedMps = new Float64Array(roads.pieces.count).fill(MPS)
    const day = driven(roads, speedMps)
    day.steps.toM[5] = day.steps.fromM[5] + 1
    day.steps.toMs[5] = day.steps.fromMs[5] + 50
    const slowing = step(day, 5, MPS + 5)
    const lostJ = 0.5 * 250 * 1.03 * (25 * 25 - 400) - slowing.rollingJ - slowing.dragJ
    expect(slowing.changeS).toBe(5)
    expect(-slowing.busJ).toBeCloseTo(5 * 600, 6)
    expect(slowing.brakedJ).toBeCloseTo(lostJ - 5 * 1000, 6)
  })

  test('the time of a last step’s change of speed counts starting and halting', () => {
    expect(step(driven(road(0)), 0, 0, true).changeS).toBeCloseTo(MPS / 0.6 + MPS / 1, 9)
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
    const speedMps = new Float64Array(roads.pieces.count).fill(MPS)
    const weak = prepareDrive({ ...drive, motorMaxW: 700 })
    expect(limitByMotor({ load, drive: weak }, driven(roads, speedMps), speedMps)).toBe(true)
    const slowed = [...speedMps].flatMap((mps, i) => (mps < MPS ? [i] : []))
    expect(slowed).toEqual([6])
  })
})
