import { describe, expect, test } from 'vitest'
import { course } from '../../server/engine/course.ts'
import type { Course } from '../../server/engine/course.ts'
import type { DayRules, Standing, StageRule, StopRule } from '../../server/engine/day-rules.ts'
import { drivenRoad } from '../../server/engine/driven-road.ts'
import { steps } from '../../server/engine/steps.ts'
import { timetable } from '../../server/engine/timetable.ts'
import { DRIVE, LOAD } from './invented-car.ts'

const HOUR = 3_600_000
const MINUTE = 60_000

/** A straight level road due east on the equator, one degree of longitude a stage: 111.3195 km. */
function road(stages: number): Course {
  const lonRad = Float64Array.from({ length: stages + 1 }, (_, i) => (i * Math.PI) / 180)
  const points = { latRad: new Float64Array(stages + 1), lonRad, altM: new Float64Array(stages + 1) }
  const lengthM = 111_319.49
  return course(
    Array.from({ length: stages }, (_, i) => ({
      points,
      stretches: [],
      fromM: i * lengthM,
      toM: (i + 1) * lengthM,
      roughnessM: 0.03,
      limitMps: 30,
    })),
  )
}

const stop = (change: Partial<StopRule> = {}): StopRule => ({
  name: 'Twin Wells',
  lengthS: 1800,
  runsFromOpening: false,
  lifts: true,
  raiseS: 120,
  lowerS: 180,
  opensMs: new Float64Array([Number.NaN, Number.NaN]),
  closesMs: new Float64Array([Number.NaN, Number.NaN]),
  ...change,
})

const rule = (finish: string, at: StopRule | null = null): StageRule => ({ name: finish, start: 'x', finish, stop: at })

const day = (change: Partial<DayRules> = {}): DayRules => ({
  opensMs: 6 * HOUR,
  closesMs: 19 * HOUR,
  drivingFromMs: 8 * HOUR,
  drivingToMs: 17 * HOUR,
  charging: [
    { fromMs: 6 * HOUR, toMs: 7.5 * HOUR, lifts: true },
    { fromMs: 17 * HOUR, toMs: 18.5 * HOUR, lifts: true },
  ],
  raiseS: 120,
  lowerS: 60,
  lastStage: 0,
  ...change,
})

const AT_START: Standing = { stage: 0, placeM: 0, stopLeftS: 0 }

/** Starting at 0.6 m/s² and braking at 1 m/s² lose 20/2 · (1/0.6 + 1/1) s against 20 m/s all the way, by hand. */
const LOST_S = 80 / 3

/** One stage at 20 m/s from rest to rest. */
const STAGE_S = 111_319.49 / 20 + LOST_S

const CAR = { load: LOAD, drive: DRIVE, bounds: { accelerationMps2: 0.6, brakingMps2: 1 } }
const at20 = (roads: Course) => drivenRoad(CAR, roads, new Float64Array(roads.pieces.count).fill(20))

/** The day of a car that drives 20 m/s everywhere. */
const laidOut = (roads: Course, stages: StageRule[], rules: DayRules, standing = AT_START, dayIndex = 0) =>
  timetable(at20(roads), stages, rules, { dayIndex, standing })

const kinds = (table: { spans: { kind: string }[] }) => table.spans.map((s) => s.kind).join(' ')

describe('the day as a timetable', () => {
  test('driving starts with the driving hours and takes length over speed, starting and braking', () => {
    const { spans } = laidOut(road(1), [rule('Twin Wells')], day())
    const drive = spans.find((s) => s.kind === 'drive')
    expect(drive?.fromMs).toBe(8 * HOUR)
    expect((drive?.toMs ?? 0) - 8 * HOUR).toBeCloseTo(STAGE_S * 1000, 0)
  })

  test('its spans follow each other without a gap from opening to closing', () => {
    const table = laidOut(road(2), [rule('a', stop()), rule('b')], day({ lastStage: 1 }))
    expect(kinds(table)).toBe('morning-charge parked drive stop drive parked evening-charge parked')
    table.spans.forEach((span, i) => expect(span.fromMs).toBe(i === 0 ? 6 * HOUR : table.spans[i - 1].toMs))
    expect(table.spans.at(-1)?.toMs).toBe(19 * HOUR)
  })

  test('a stage that the clock cuts off goes on the next morning from where the car stands', () => {
    const roads = road(1)
    const first = laidOut(roads, [rule('far')], day({ drivingToMs: 9 * HOUR }))
    expect(first.isCutOff).toBe(true)
    expect(first.evening.placeM).toBeCloseTo(72_000 - 20 * LOST_S, 3)
    const next = laidOut(roads, [rule('far')], day({ lastStage: 0 }), first.evening, 1)
    const drive = next.spans.find((s) => s.kind === 'drive')
    expect(drive?.fromM).toBeCloseTo(72_000 - 20 * LOST_S, 3)
    expect(next.evening).toMatchObject({ stage: 1, stopLeftS: 0 })
    expect(next.isCutOff).toBe(false)
  })

  test('a stage of a later day does not start early', () => {
    const table = laidOut(road(2), [rule('a'), rule('b')], day({ lastStage: 0 }))
    expect(table.spans.filter((s) => s.kind === 'drive')).toHaveLength(1)
    expect(table.evening.stage).toBe(1)
  })

  test('a stop that the end of the day cuts in two is stood to its end the next morning', () => {
    const roads = road(2)
    const stages = [rule('a', stop()), rule('b')]
    const arriveS = STAGE_S
    const rules = day({ drivingToMs: 8 * HOUR + arriveS * 1000 + 10 * MINUTE, lastStage: 1 })
    const first = laidOut(roads, stages, rules)
    expect(first.evening.stopLeftS).toBeCloseTo(1200, 0)
    expect(first.isCutOff).toBe(true)
    const next = laidOut(roads, stages, day({ lastStage: 1 }), first.evening, 1)
    expect(kinds(next)).toMatch(/^morning-charge parked stop drive/)
    const stood = next.spans.find((s) => s.kind === 'stop')
    expect(stood?.fromMs).toBe(8 * HOUR)
    expect((stood?.toMs ?? 0) - 8 * HOUR).toBeCloseTo(20 * MINUTE, -2)
  })

  test('a car that comes before the stop opens leaves no sooner than the opening', () => {
    const opensMs = new Float64Array([11 * HOUR, Number.NaN])
    const arriveMs = 8 * HOUR + STAGE_S * 1000
    const early = laidOut(road(1), [rule('a', stop({ opensMs }))], day())
    expect(early.spans.find((s) => s.kind === 'stop')).toMatchObject({ toMs: 11 * HOUR })
    const clocked = laidOut(road(1), [rule('a', stop({ opensMs, runsFromOpening: true }))], day())
    expect(clocked.spans.find((s) => s.kind === 'stop')?.toMs).toBeCloseTo(11.5 * HOUR, 0)
    const open = laidOut(road(1), [rule('a', stop({ opensMs: new Float64Array([9 * HOUR, 0]) }))], day())
    expect(open.spans.find((s) => s.kind === 'stop')?.toMs).toBeCloseTo(arriveMs + 30 * MINUTE, -1)
  })

  test('a stop of any length is over once it was stood, whatever the last digits of its end', () => {
    const roads = road(2)
    const shift = Date.UTC(2026, 9, 17)
    for (let k = 1; k <= 40; k++) {
      const rules = day({
        opensMs: shift + 6 * HOUR,
        closesMs: shift + 19 * HOUR,
        drivingFromMs: shift + 8 * HOUR,
        drivingToMs: shift + 17 * HOUR,
        charging: [],
        lastStage: 1,
      })
      const table = laidOut(roads, [rule('a', stop({ lengthS: k * 7.777_777_7 })), rule('b')], rules)
      expect(table.evening).toMatchObject({ stage: 2, stopLeftS: 0 })
    }
  })

  test('the end of the day cuts the length of a stop, not the wait for its opening', () => {
    const opensMs = new Float64Array([20 * HOUR, Number.NaN])
    const onArrival = laidOut(road(1), [rule('a', stop({ opensMs }))], day())
    expect(onArrival.evening).toMatchObject({ stage: 1, stopLeftS: 0 })
    expect(onArrival.isCutOff).toBe(false)
    const clocked = laidOut(road(1), [rule('a', stop({ opensMs, runsFromOpening: true }))], day())
    expect(clocked.evening.stopLeftS).toBe(1800)
    const half = new Float64Array([16.75 * HOUR, Number.NaN])
    const begun = laidOut(road(1), [rule('a', stop({ opensMs: half, runsFromOpening: true }))], day())
    expect(begun.evening.stopLeftS).toBeCloseTo(900, 6)
  })

  test('a car that needs less than a millisecond more than the hours give has arrived', () => {
    const roads = road(2)
    const arriveMs = 8 * HOUR + (roads.stages[0].toM / 20 + LOST_S) * 1000
    const inTime = laidOut(roads, [rule('a'), rule('b')], day({ drivingToMs: arriveMs - 0.3, lastStage: 1 }))
    expect(inTime.evening).toEqual({ stage: 1, placeM: roads.stages[0].toM, stopLeftS: 0 })
    const nearlyMs = arriveMs - (roads.pieces.lengthM[0] / 20) * 1000
    const atEdge = laidOut(roads, [rule('a'), rule('b')], day({ drivingToMs: nearlyMs, lastStage: 1 }))
    expect(atEdge.evening.placeM).toBeCloseTo(roads.pieces.fromM[roads.stages[0].endPiece - 1], 3)
  })

  test('a car in a stop stands on the road that it came by, before a stage on the road of that stage', () => {
    const roads = road(2)
    const stages = [rule('a', stop()), rule('b')]
    const table = laidOut(roads, stages, day({ lastStage: 0 }))
    const last = roads.stages[0].endPiece - 1
    expect(table.spans.filter((s) => s.kind !== 'drive').map((s) => s.piece)).toEqual([0, 0, last, last, last, last])
    const next = laidOut(roads, stages, day({ lastStage: 1 }), table.evening, 1)
    expect(next.spans[0].piece).toBe(last + 1)
    const inStop = laidOut(roads, stages, day({ lastStage: 1 }), { ...table.evening, stopLeftS: 60 }, 1)
    expect(inStop.spans[0].piece).toBe(last)
  })

  test('an arrival after the closing is named with its delay', () => {
    const closesMs = new Float64Array([9 * HOUR, Number.NaN])
    const { late } = laidOut(road(1), [rule('a', stop({ closesMs }))], day())
    expect(late).toHaveLength(1)
    const justMs = 8 * HOUR + STAGE_S * 1000
    const just = (shiftMs: number) =>
      laidOut(road(1), [rule('a', stop({ closesMs: new Float64Array([justMs + shiftMs, 0]) }))], day()).late
    expect(just(-100)).toHaveLength(1)
    expect(just(100)).toHaveLength(0)
    expect(late[0].byS).toBeCloseTo(STAGE_S - 3600, 1)
  })

  test('the array stands lifted once raised and until it must be lowered', () => {
    const table = laidOut(road(1), [rule('a', stop())], day())
    const stood = table.spans.find((s) => s.kind === 'stop')
    expect((stood?.liftedFromMs ?? 0) - (stood?.fromMs ?? 0)).toBeCloseTo(120_000, 6)
    expect((stood?.toMs ?? 0) - (stood?.liftedToMs ?? 0)).toBeCloseTo(180_000, 6)
    const short = laidOut(road(1), [rule('a', stop({ lengthS: 200 }))], day())
    const brief = short.spans.find((s) => s.kind === 'stop')
    expect(brief?.liftedToMs).toBe(brief?.liftedFromMs)
  })

  test('a car that is in early charges only once its window opens', () => {
    const table = laidOut(
      road(1),
      [rule('a')],
      day({ charging: [{ fromMs: 14 * HOUR, toMs: 15 * HOUR, lifts: false }] }),
    )
    expect(kinds(table)).toBe('parked drive parked evening-charge parked')
    expect(table.spans[3]).toMatchObject({ fromMs: 14 * HOUR, toMs: 15 * HOUR, liftedFromMs: 0, liftedToMs: 0 })
  })

  test('a car that comes while a window is open charges at once', () => {
    const charging = [{ fromMs: 9 * HOUR, toMs: 18 * HOUR, lifts: true }]
    expect(kinds(laidOut(road(1), [rule('a')], day({ charging })))).toBe('parked drive evening-charge parked')
  })

  test('a place that the car cannot pass ends its day in front of it', () => {
    const roads = road(1)
    const driven = at20(roads)
    driven.heldMps[30] = 0
    const table = timetable(driven, [rule('a')], day(), { dayIndex: 0, standing: AT_START })
    expect(table.isCutOff).toBe(true)
    expect(table.evening.placeM).toBeCloseTo(roads.pieces.fromM[30], 6)
    const drive = table.spans.find((s) => s.kind === 'drive')
    const lastS = ((drive?.toMs ?? 0) - (drive?.fromMs ?? 0)) / 1000
    expect(lastS).toBeCloseTo(roads.pieces.fromM[30] / 20 + LOST_S, 3)
    const next = timetable(driven, [rule('a')], day(), { dayIndex: 1, standing: table.evening })
    expect(next.spans.some((s) => s.kind === 'drive')).toBe(false)
    expect(next.evening).toEqual(table.evening)
  })
})

describe('the day cut into steps', () => {
  const roads = road(2)
  const table = laidOut(roads, [rule('a', stop()), rule('b')], day({ lastStage: 1, drivingToMs: 11 * HOUR }))
  const cut = steps(roads, table)

  test('the steps follow each other without a gap and fill their arrays', () => {
    expect(cut.count).toBe(cut.fromMs.length)
    for (let i = 1; i < cut.count; i++) {
      expect(cut.fromMs[i]).toBeCloseTo(cut.toMs[i - 1], 3)
      expect(cut.fromM[i]).toBeCloseTo(cut.toM[i - 1], 6)
    }
    expect(cut.toMs[cut.count - 1]).toBe(19 * HOUR)
  })

  test('the road driven is the road of the timetable', () => {
    const drivenM = table.spans.reduce((sum, s) => sum + s.toM - s.fromM, 0)
    expect(cut.toM[cut.count - 1]).toBeCloseTo(drivenM, 6)
    expect(drivenM / 20 + 2 * LOST_S + 1800).toBeCloseTo(10_800, 3)
  })

  test('trackers rest outside the windows, and the array is flat while it drives', () => {
    for (let i = 0; i < cut.count; i++) {
      const { kind } = table.spans[cut.span[i]]
      expect(cut.charging[i]).toBe(kind === 'parked' ? 0 : 1)
      if (kind === 'drive') expect(cut.lifted[i]).toBe(0)
    }
    const liftedS = cut.lifted.reduce((sum, on, i) => sum + (on * (cut.toMs[i] - cut.fromMs[i])) / 1000, 0)
    expect(liftedS).toBeCloseTo(1.5 * 3600 - 180 + (1800 - 300) + 1.5 * 3600 - 180, 3)
  })
})

describe('what is left of the hours', () => {
  test('is not driven where it is less than a second', () => {
    const roads = road(2)
    const rules = (spareMs: number) => day({ drivingToMs: 8 * HOUR + STAGE_S * 1000 + spareMs, lastStage: 1 })
    const stages = [rule('a'), rule('b')]
    expect(laidOut(roads, stages, rules(900)).spans.filter((s) => s.kind === 'drive')).toHaveLength(1)
    // 10 s from rest to rest: v/0.6 + v/1 = 10 s, v = 3.75 m/s, 18.75 m
    const brief = laidOut(roads, stages, rules(10_000))
    expect(brief.evening.placeM - roads.stages[0].toM).toBeCloseTo(18.75, 2)
  })
})

describe('a parked car', () => {
  test('stands level at the height of the place, not of the middle of its piece', () => {
    const roads = road(1)
    const { pieces } = roads
    const last = pieces.count - 1
    pieces.gradeRad.fill(0.05)
    pieces.startAltM[0] = 100
    pieces.endAltM[last] = 900
    pieces.altM.fill(500)
    const table = laidOut(roads, [rule('a')], day())
    const cut = steps(roads, table)
    expect([cut.altM[0], cut.gradeRad[0]]).toEqual([100, 0])
    expect([cut.altM[cut.count - 1], cut.gradeRad[cut.count - 1]]).toEqual([900, 0])
  })
})
