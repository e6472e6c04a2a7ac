import { describe, expect, it } from 'vitest'
import { prepareBounds } from '../../server/engine/driven-road.ts'
import { holdingN } from '../../server/engine/road.ts'
import { driven, each, USUAL } from './driven-legs.ts'
import { DRIVE, LEVEL, LOAD } from './invented-car.ts'

const MPS = 80 / 3.6

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

describe('a drive that starts inside a piece', () => {
  it('goes on from there', () => {
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
