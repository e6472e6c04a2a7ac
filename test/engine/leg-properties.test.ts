import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { MotionBounds } from '../../server/engine/driven-road.ts'
import { holdingN } from '../../server/engine/road.ts'
import { driven, each } from './driven-legs.ts'
import type { Asked } from './driven-legs.ts'
import { DRIVE, LEVEL, LOAD } from './invented-car.ts'

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
          expect(Math.max(m.fromMps, m.toMps)).toBeLessThanOrEqual(on.capMps[m.piece] * (1 + 1e-9))
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
      { numRuns: 30 },
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
})
