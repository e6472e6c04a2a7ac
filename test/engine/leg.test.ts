import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { course } from '../../server/engine/course.ts'
import type { Course } from '../../server/engine/course.ts'
import type { Drive } from '../../server/engine/drive.ts'
import { drivenRoad, prepareBounds } from '../../server/engine/driven-road.ts'
import type { MotionBounds } from '../../server/engine/driven-road.ts'
import { driveLeg } from '../../server/engine/leg.ts'
import { newMoves } from '../../server/engine/moves.ts'
import type { Moves } from '../../server/engine/moves.ts'
import { holdingN } from '../../server/engine/road.ts'
import { DRIVE, LEVEL, LOAD } from './invented-car.ts'

const USUAL: MotionBounds = { accelerationMps2: 0.6, brakingMps2: 1 }
const STRONG: Drive = { ...DRIVE, motorMaxW: 1e6, motorMaxN: 1e5 }
const MPS = 80 / 3.6

/** Pieces of these lengths along the equator, level or with these grades. [m] */
function road(lengthsM: number[], grades: number[] = []): Course {
  const edges = [0]
  for (const m of lengthsM) edges.push(edges[edges.length - 1] + m)
  const roads = course([
    {
      points: {
        latRad: new Float64Array(edges.length),
        lonRad: Float64Array.from(edges, (m) => m / 6_378_137),
        altM: new Float64Array(edges.length),
      },
      stretches: [],
      fromM: 0,
      toM: edges[edges.length - 1],
      cutsM: edges.slice(1, -1),
      roughnessM: 0.03,
      roadHeatC: 0,
      limitMps: 100,
    },
  ])
  // One piece for each length: longer ones are cut in even parts, which this road does without.
  if (roads.pieces.count !== lengthsM.length) throw new Error(`${roads.pieces.count} pieces`)
  grades.forEach((slope, i) => void (roads.pieces.gradeRad[i] = Math.atan(slope)))
  return roads
}

interface Asked {
  lengthsM: number[]
  mps: number[]
  grades?: number[]
  bounds?: MotionBounds
  drive?: Drive
  fromM?: number
  withinS?: number
  halts?: number[]
}

function driven(asked: Asked) {
  const {
    lengthsM,
    mps,
    grades = [],
    bounds = USUAL,
    drive = STRONG,
    fromM = 0,
    withinS = Infinity,
    halts = [],
  } = asked
  const roads = road(lengthsM, grades)
  halts.forEach((perM, i) => void (roads.pieces.haltsPerM[i] = perM))
  const on = drivenRoad({ load: LOAD, drive, bounds }, roads, Float64Array.from(mps))
  const moves = newMoves(2)
  const piece = roads.pieces.fromM.findLastIndex((m) => m <= fromM)
  const leg = driveLeg(on, { fromM, toM: roads.lengthM, piece, withinS }, moves)
  return { ...leg, moves, road: on, lengthM: roads.lengthM }
}

const each = (moves: Moves) =>
  Array.from({ length: moves.count }, (_, i) => ({
    piece: moves.piece[i],
    fromM: moves.fromM[i],
    toM: moves.toM[i],
    fromMps: moves.fromMps[i],
    toMps: moves.toMps[i],
    durationS: moves.durationS[i],
  }))

describe('a level road at 80 km/h from rest to rest, by hand', () => {
  const { moves, durationS, lengthM } = driven({ lengthsM: [1000, 1000, 1000], mps: [MPS, MPS, MPS] })

  it('0.6 m/s² take 37.0 s and 411.5 m to 80 km/h, and lose 18.5 s', () => {
    const [start] = each(moves)
    expect(start.durationS).toBeCloseTo(37.04, 2)
    expect(start.toM).toBeCloseTo(411.5, 1)
    expect(start.toMps).toBeCloseTo(MPS, 12)
    expect(start.durationS - start.toM / MPS).toBeCloseTo(18.5, 1)
  })

  it('1 m/s² take 22.2 s and 246.9 m to rest, and lose 11.1 s', () => {
    const last = each(moves)[moves.count - 1]
    expect(last.durationS).toBeCloseTo(22.22, 2)
    expect(last.toM - last.fromM).toBeCloseTo(246.9, 1)
    expect([last.toM, last.toMps]).toEqual([lengthM, 0])
  })

  it('so the whole takes its length over 80 km/h and 29.6 s', () => {
    expect(durationS).toBeCloseTo(lengthM / MPS + MPS / 1.2 + MPS / 2, 6)
  })

  it('a move per piece and change of speed, no more', () => expect(moves.count).toBe(5))
})

describe('speeds at the edges', () => {
  it('a lower speed ahead is reached by its edge, a higher one after it', () => {
    const { moves } = driven({ lengthsM: [1000, 1000, 1000], mps: [25, 15, 25] })
    const all = each(moves)
    const edge = all.find((m) => m.piece === 1)
    expect(edge?.fromMps).toBeCloseTo(15, 12)
    // (25² − 15²)/2 = 200 m before the edge
    const braking = all.find((m) => m.piece === 0 && m.toMps < m.fromMps)
    expect((braking?.toM ?? 0) - (braking?.fromM ?? 0)).toBeCloseTo(200, 6)
    const gaining = all.find((m) => m.piece === 2 && m.toMps > m.fromMps)
    expect((gaining?.toM ?? 0) - (gaining?.fromM ?? 0)).toBeCloseTo(400 / 1.2, 6)
  })

  it('braking begins a piece before where one is too short for it', () => {
    const { moves } = driven({ lengthsM: [900, 100, 900], mps: [25, 25, 10] })
    const all = each(moves)
    // 25² − 10² = 525: 262.5 m, of which 162.5 m in the first piece; √(100 + 200) m/s at the edge between
    expect(all.find((m) => m.piece === 1)?.fromMps).toBeCloseTo(Math.sqrt(300), 9)
    expect(all.findLast((m) => m.piece === 0)?.fromM).toBeCloseTo(900 - 162.5, 6)
  })

  it('a leg too short for its speed peaks lower', () => {
    const { moves, durationS } = driven({ lengthsM: [200], mps: [30] })
    // v²/1.2 + v²/2 = 200
    const peakMps = Math.sqrt(200 / (1 / 1.2 + 1 / 2))
    expect(each(moves).map((m) => m.toMps)).toEqual([expect.closeTo(peakMps, 6), 0])
    expect(durationS).toBeCloseTo(peakMps / 0.6 + peakMps, 5)
  })
})

describe('a motor that is short of pull', () => {
  const going = (slope: number) => ({ ...LEVEL, densityKgM3: 1.2, gradeRad: Math.atan(slope) })

  it('gives 1000 W and 200 N: from rest it takes as long as the integral of motion says', () => {
    const drive = { ...DRIVE, motorMaxW: 1000, motorMaxN: 200 }
    const { moves } = driven({ lengthsM: Array(6).fill(1000), mps: Array(6).fill(20), drive })
    let timeS = 0
    for (let i = 0; i < 20_000; i++) {
      const v = (18 * (i + 0.5)) / 20_000
      const pull = (Math.min(200, 1000 / v) - holdingN(LOAD, v, going(0))) / (250 * 1.03)
      timeS += 18 / 20_000 / Math.min(pull, 0.6)
    }
    const reach = each(moves).filter((m) => m.toMps <= 18 && m.fromMps < m.toMps)
    const lastMps = reach[reach.length - 1].toMps
    const tookS = reach.reduce((sum, m) => sum + m.durationS, 0)
    // The pull at the higher end of each band stands for the band: a little slower, never faster.
    expect(lastMps).toBeGreaterThan(17.8)
    // The time to the last band's speed against that to 18 m/s, 0.15 m/s above it.
    expect(tookS / timeS).toBeGreaterThan(0.97)
    expect(tookS / timeS).toBeLessThan(1.08)
  })

  it('lets the car slow down on a hill as the road takes it, without braking', () => {
    const drive = { ...DRIVE, motorMaxW: 1500 }
    const { moves, road: on } = driven({
      lengthsM: [1400, 1400, 1000, 1000, 1000],
      mps: [22, 22, 22, 22, 22],
      grades: [-0.01, 0, 0.05, 0.05, 0],
      drive,
    })
    const all = each(moves)
    const hill = all.filter((m) => m.piece === 2 || m.piece === 3)
    expect(on.heldMps[2]).toBeLessThan(12)
    expect(hill[0].fromMps).toBeCloseTo(22, 1)
    expect(hill[hill.length - 1].toMps).toBeCloseTo(on.heldMps[3], 1)
    for (const m of hill) expect((m.fromMps ** 2 - m.toMps ** 2) / (2 * (m.toM - m.fromM))).toBeLessThan(0.7)
  })
})

/** Even over the range; fc.double is even over the digits, so mostly next to 0. */
const number = (min: number, max: number) =>
  fc.integer({ min: 0, max: 1_000_000 }).map((n) => min + ((max - min) * n) / 1e6)
const anyRoad = fc
  .array(fc.record({ lengthM: number(20, 1400), mps: number(3, 38), slope: number(-0.06, 0.06) }), {
    minLength: 1,
    maxLength: 12,
  })
  .map((pieces) => ({
    lengthsM: pieces.map((p) => p.lengthM),
    mps: pieces.map((p) => p.mps),
    grades: pieces.map((p) => p.slope),
  }))
const anyBounds = fc.record({ accelerationMps2: number(0.1, 4), brakingMps2: number(0.2, 6) })

/** The same drive on a grid of tenths of a metre, forwards and backwards, by hand. [s] */
function gridS({ lengthsM, mps, grades = [] }: Asked, bounds: MotionBounds): number {
  const cells = lengthsM.flatMap((m, i) => {
    const n = Math.ceil(m / 0.1)
    const slopeM = m * Math.hypot(1, grades[i])
    return Array.from({ length: n }, () => ({ m: slopeM / n, cap: mps[i] ** 2 }))
  })
  const most = cells.map((c, i) => Math.min(c.cap, i === 0 ? 0 : cells[i - 1].cap))
  most.push(0)
  for (let i = cells.length - 1; i >= 0; i--)
    most[i] = Math.min(most[i], most[i + 1] + 2 * bounds.brakingMps2 * cells[i].m)
  let [v2, timeS] = [0, 0]
  cells.forEach((c, i) => {
    const next = Math.min(v2 + 2 * bounds.accelerationMps2 * c.m, most[i + 1])
    timeS += (2 * c.m) / (Math.sqrt(v2) + Math.sqrt(next))
    v2 = next
  })
  return timeS
}

describe('whatever the road, the speeds and the bounds', () => {
  it('moves follow each other without a jump of place or speed, within bounds and under every speed held', () => {
    fc.assert(
      fc.property(anyRoad, anyBounds, (asked, bounds) => {
        const { moves, durationS, reachedM, lengthM, road: on } = driven({ ...asked, bounds })
        const all = each(moves)
        expect(reachedM).toBe(lengthM)
        expect([all[0].fromM, all[0].fromMps, all.at(-1)?.toM, all.at(-1)?.toMps]).toEqual([0, 0, lengthM, 0])
        let heldS = 0
        all.forEach((m, i) => {
          if (i > 0) expect([m.fromM, m.fromMps]).toEqual([all[i - 1].toM, all[i - 1].toMps])
          const slopeM = (m.toM - m.fromM) / Math.cos(on.course.pieces.gradeRad[m.piece])
          const mps2 = (m.toMps ** 2 - m.fromMps ** 2) / (2 * slopeM)
          expect(mps2).toBeLessThanOrEqual(bounds.accelerationMps2 * (1 + 1e-6))
          expect(mps2).toBeGreaterThanOrEqual(-bounds.brakingMps2 * (1 + 1e-6))
          expect(Math.max(m.fromMps, m.toMps)).toBeLessThanOrEqual(on.capMps[m.piece] * (1 + 1e-12))
          expect(m.durationS).toBeCloseTo((2 * slopeM) / (m.fromMps + m.toMps), 9)
          heldS += slopeM / on.capMps[m.piece]
        })
        expect(durationS).toBeCloseTo(
          all.reduce((sum, m) => sum + m.durationS, 0),
          9,
        )
        expect(durationS).toBeGreaterThan(heldS)
      }),
      { numRuns: 300 },
    )
  })

  it('the time is that of the same drive on a fine grid', () => {
    fc.assert(
      fc.property(anyRoad, anyBounds, (asked, bounds) => {
        const wantedS = gridS(asked, bounds)
        expect(driven({ ...asked, bounds }).durationS / wantedS).toBeCloseTo(1, 2)
      }),
      { numRuns: 60 },
    )
  })

  it('wider bounds take less time, and without bounds length over speed is left', () => {
    fc.assert(
      fc.property(anyRoad, anyBounds, (asked, bounds) => {
        const times = [1, 2, 4].map((k) => {
          const wider = { accelerationMps2: bounds.accelerationMps2 * k, brakingMps2: bounds.brakingMps2 * k }
          return driven({ ...asked, bounds: wider }).durationS
        })
        // Speeds within 0.02 m/s of each other count as one.
        expect(times[1]).toBeLessThan(times[0] * 1.001)
        expect(times[2]).toBeLessThan(times[1] * 1.001)
        const { durationS, road: on } = driven({ ...asked, bounds: { accelerationMps2: 20, brakingMps2: 20 } })
        const { lengthM, gradeRad } = on.course.pieces
        const heldS = on.capMps.reduce((sum, mps, i) => sum + lengthM[i] / Math.cos(gradeRad[i]) / mps, 0)
        // Each piece loses at most what starting and braking at 20 m/s² lose, and a moment of 0.02 s.
        expect(durationS - heldS).toBeLessThan(on.capMps.reduce((sum, mps) => sum + mps / 20 + 0.02, 0))
      }),
      { numRuns: 100 },
    )
  })

  it('the motor is nowhere asked for more than it has', () => {
    fc.assert(
      fc.property(anyRoad, number(300, 6000), number(150, 400), (asked, motorMaxW, motorMaxN) => {
        const drive = { ...DRIVE, motorMaxW, motorMaxN }
        const { moves, road: on } = driven({ ...asked, drive })
        if (on.heldMps.some((mps) => mps < 1)) return
        for (const m of each(moves)) {
          const gradeRad = on.course.pieces.gradeRad[m.piece]
          const going = { ...LEVEL, densityKgM3: 1.2, gradeRad }
          const mps2 = ((m.toMps ** 2 - m.fromMps ** 2) * Math.cos(gradeRad)) / (2 * (m.toM - m.fromM))
          for (const v of [m.fromMps, (m.fromMps + m.toMps) / 2, m.toMps]) {
            const forceN = LOAD.massKg * LOAD.rotatingFactor * mps2 + holdingN(LOAD, v, going)
            // Less than 0.001 m/s² of pull counts as that much from rest: 0.26 N.
            expect(forceN).toBeLessThanOrEqual(motorMaxN * (1 + 1e-6) + 0.26)
            expect(forceN * v).toBeLessThanOrEqual(motorMaxW * (1 + 1e-6) + 0.26 * v)
          }
        }
      }),
      { numRuns: 300 },
    )
  })

  it('a drive that the time cuts off stands when it ends, the farther the more time there is', () => {
    fc.assert(
      fc.property(anyRoad, anyBounds, number(0.02, 0.98), number(0, 0.02), (asked, bounds, share, halts) => {
        const all = { ...asked, bounds, halts: asked.mps.map(() => halts) }
        const whole = driven(all)
        const withinS = share * whole.durationS
        const cut = driven({ ...all, withinS })
        const moves = each(cut.moves)
        expect(cut.reachedM).toBeLessThan(whole.lengthM)
        expect([moves.at(-1)?.toM, moves.at(-1)?.toMps]).toEqual([cut.reachedM, 0])
        expect(cut.durationS).toBeLessThanOrEqual(withinS)
        expect(cut.durationS).toBeGreaterThan(withinS - 0.01)
        expect(moves.reduce((sum, m) => sum + m.durationS, 0)).toBeCloseTo(cut.durationS, 9)
        moves.forEach((m, i) => {
          if (i > 0) expect([m.fromM, m.fromMps]).toEqual([moves[i - 1].toM, moves[i - 1].toMps])
        })
        const later = driven({ ...all, withinS: withinS * 1.01 + 0.1 })
        expect(later.reachedM).toBeGreaterThan(cut.reachedM)
      }),
      { numRuns: 200 },
    )
  })

  it('a drive that starts inside a piece goes on from there', () => {
    const rest = driven({ lengthsM: [1000, 1000], mps: [20, 20], fromM: 400 })
    expect(each(rest.moves)[0].fromM).toBe(400)
    expect(rest.durationS).toBeCloseTo(1600 / 20 + 10 / 0.6 + 10, 6)
  })
})

describe('expected halts', () => {
  it('each costs the time of braking and starting again', () => {
    const plain = driven({ lengthsM: [1000, 1000, 1000], mps: [20, 20, 20] })
    const halting = driven({ lengthsM: [1000, 1000, 1000], mps: [20, 20, 20], halts: [0, 0.003, 0] })
    expect(halting.durationS - plain.durationS).toBeCloseTo(3 * 10 * (1 / 1 + 1 / 0.6), 6)
  })
})

it.each([
  ['bounds.accelerationMps2', { accelerationMps2: 0 }],
  ['bounds.brakingMps2', { brakingMps2: Number.NaN }],
])('a wrong %s is refused by name', (field, change) => {
  expect(() => prepareBounds({ ...USUAL, ...change })).toThrowError(expect.objectContaining({ field }))
})
