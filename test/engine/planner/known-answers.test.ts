import { describe, expect, it } from 'vitest'
import { bestDrive } from '../../../server/engine/planner/best-drive.ts'
import type { DayTables } from '../../../server/engine/planner/day-tables.ts'
import { earliestArrival } from '../../../server/engine/planner/bound-day.ts'
import type { Refined } from '../../../server/engine/planner/refine.ts'
import { dayOf, type DayParts, STARTS_S } from './cloudy-day.ts'
import { drivenByTheSecond } from './second-by-second.ts'

const WH = 3600

/** The hand-worked car: P = a·v + b·v³ with b = ½·1.17·0.10/0.96 and a = 250·9.80665·0.0035/0.96. */
const B = 0.0609
const A = 8.94

const PLAIN: DayParts = {
  lengthKm: 300,
  grade: () => 0,
  limitKmh: () => 130,
  stopsKm: [],
  headwindMps: 0,
  fronts: [],
  openingWh: 4500,
  capacityWh: 5000,
  targetWh: 3000,
  reserveWh: 500,
  clearW: () => 700,
  lossPerW: 0,
  clockStepS: 60,
}

/** A plain day without an evening, with power by the printed a and b exactly, and other sun where one is given. */
function plainDay(
  parts: Partial<DayParts>,
  sunW?: (piece: number, atS: number) => number,
  loss = { coulombic: 1 },
): DayTables {
  const day = dayOf({ ...PLAIN, ...parts })
  const { speeds, clock, pieces } = day
  const loadW = day.loadW.map((W, at) => {
    const v = speeds.from + (at % speeds.count) * speeds.step
    return parts.grade === undefined ? A * v + B * v ** 3 : W
  })
  const harvestW =
    sunW === undefined
      ? day.harvestW
      : Float64Array.from({ length: pieces * clock.count }, (_, at) =>
          sunW(Math.floor(at / clock.count), clock.from + (at % clock.count) * clock.step),
        )
  const duskGainJ = new Float64Array(clock.count)
  return { ...day, loadW, harvestW, duskGainJ, pack: { ...day.pack, ...loss } }
}

const kmhOf = (day: DayTables): number[] => {
  const made = bestDrive(day)
  expect(made?.track.shortJ).toBeLessThanOrEqual(0)
  return [...(made?.drive.speedMps ?? [])].map((v) => v * 3.6)
}
const spread = (values: number[]): number => Math.max(...values) - Math.min(...values)

describe('sun that differs from place to place', () => {
  it('is driven so that 2bv³ + S is the same everywhere, to 0.1 %', () => {
    const S = (piece: number): number => (piece < 100 || piece >= 200 ? 900 : 200)
    const speeds = kmhOf(plainDay({}, S))
    const prices = speeds.map((kmh, i) => 2 * B * (kmh / 3.6) ** 3 + S(i))
    const mean = prices.reduce((sum, W) => sum + W, 0) / prices.length
    for (const W of prices) expect(Math.abs(W / mean - 1)).toBeLessThan(1e-3)
    expect(speeds[150]).toBeGreaterThan(speeds[50] + 10)
  })

  it('gives the printed 72.7 km/h under 900 W and 86.7 km/h under 200 W where their price is that of 1,902 W', () => {
    // 2·0.0609·(72.7/3.6)³ + 900 = 1,903 W and 2·0.0609·(86.7/3.6)³ + 200 = 1,901 W: half the road each, energy by hand.
    const [bright, cloudy] = [72.7 / 3.6, 86.7 / 3.6]
    const usedJ = (v: number, S: number): number => ((A * v + B * v ** 3 - S) / v) * 150_000
    const usedWh = (usedJ(bright, 900) + usedJ(cloudy, 200)) / WH
    const speeds = kmhOf(plainDay({ targetWh: 4500 - usedWh }, (piece) => (piece % 2 === 0 ? 900 : 200)))
    speeds.forEach((kmh, i) => expect(Math.abs(kmh - (i % 2 === 0 ? 72.7 : 86.7))).toBeLessThan(0.2))
  })
})

describe('a pack that loses by its resistance', () => {
  const slope = (v: number): number => A + 3 * B * v * v

  it.each([
    [0.95, 2.9],
    [0.9, 6],
  ])('is driven faster where it charges, P′ by 1/round trip: %f gives %f %% of speed', (roundTrip, printedPct) => {
    // Sun by the clock alone: 2,600 W, falling to none from 09:00 to 10:00 as half a cosine. At 80 km/h the road takes 867 W, so what is
    // kept of a watt is 1 − 2·1,733·c while charging and 1 + 2·867·c while drawing: their ratio is the round trip's.
    const lossPerW = (1 - roundTrip) / (2 * 1733 + 2 * 867 * roundTrip)
    const gone = (atS: number): number => Math.min(Math.max((atS - STARTS_S) / 3600 - 1, 0), 1)
    const sunW = (_: number, atS: number): number => 1300 * (1 + Math.cos(Math.PI * gone(atS)))
    const day = plainDay({ openingWh: 3000, capacityWh: 20_000, targetWh: 4550, lengthKm: 200, lossPerW }, sunW)
    const speeds = kmhOf(day).map((kmh) => kmh / 3.6)
    const kept = (v: number, W: number): number => 1 - 2 * (W - A * v - B * v ** 3) * lossPerW
    const [charging, drawing] = [speeds[40], speeds[185]]
    expect((slope(charging) * kept(charging, 2600)) / (slope(drawing) * kept(drawing, 0))).toBeCloseTo(1, 2)
    expect(kept(charging, 2600) / kept(drawing, 0)).toBeCloseTo(roundTrip, 2)
    expect(Math.abs(100 * (charging / drawing - 1) - printedPct)).toBeLessThan(0.5)
  })
})

describe('grades', () => {
  it('are all driven at one speed where the motor pulls, under constant sun, without wind or losses', () => {
    const grade = (piece: number): number => 0.006 * Math.sin(piece / 9) + (piece % 40 < 5 ? 0.02 : 0)
    const speeds = kmhOf(plainDay({ grade, openingWh: 4900, targetWh: 1500 }))
    expect(spread(speeds)).toBeLessThan(0.2)
  })
})

describe('ample energy', () => {
  it('is driven at the limit everywhere', () => {
    const limitKmh = (km: number): number => (km > 100 && km < 140 ? 70 : 95)
    const day = plainDay({ limitKmh, capacityWh: 20_000, openingWh: 20_000, targetWh: 500 })
    kmhOf(day).forEach((kmh, i) => expect(kmh).toBeCloseTo(limitKmh(i + 0.5), 6))
  })
})

describe('odd days', () => {
  const finite = (day: DayTables): Refined | null => {
    const made = bestDrive(day)
    if (made === null) return null
    for (const v of made.drive.speedMps) expect(v).toBeGreaterThan(0)
    expect(Number.isFinite(made.track.atS[day.pieces] + made.track.duskJ + made.track.shortJ)).toBe(true)
    const judged = drivenByTheSecond(day, made.drive)
    expect(Math.abs(judged.endS - made.track.atS[day.pieces])).toBeLessThan(0.01)
    expect(Math.abs(judged.duskJ - made.track.duskJ)).toBeLessThan(100)
    const boundS = earliestArrival(day, made.sPerJ, made.track.atS[day.pieces], 20)
    expect(boundS).toBeLessThanOrEqual(made.track.atS[day.pieces])
    return made
  }
  const endOf = (day: DayTables, made: Refined | null): number => made?.track.atS[day.pieces] ?? Number.NaN

  it('has no piece at all: the car is there', () => {
    const day = plainDay({ lengthKm: 0 })
    const made = finite(day)
    expect(endOf(day, made)).toBe(STARTS_S)
    expect(made?.track.duskJ).toBe(4500 * WH)
  })

  it('has one piece, driven as fast as its energy allows', () => {
    // By hand: A·v + B·v³ − 700 W for 1 km at v is 16 Wh.
    const day = plainDay({ lengthKm: 1, targetWh: 4484 })
    const [kmh] = kmhOf(day)
    const v = kmh / 3.6
    expect(((A * v + B * v ** 3 - 700) / v) * 1000).toBeGreaterThan(16 * WH - 60)
    expect(((A * v + B * v ** 3 - 700) / v) * 1000).toBeLessThanOrEqual(16 * WH)
    finite(day)
  })

  it('starts full: what the pack cannot take is not counted', () => {
    const day = plainDay({ openingWh: 5000, targetWh: 4990, lengthKm: 30, clearW: () => 2500 })
    const made = finite(day)
    expect(Math.max(...(made?.track.arrivalJ ?? []))).toBeLessThanOrEqual(5000 * WH)
    expect(made?.track.duskJ).toBeLessThanOrEqual(5000 * WH)
  })

  it('starts below the reserve: a drive that climbs over it in time, or none', () => {
    const day = plainDay({ openingWh: 480, targetWh: 900, lengthKm: 40, clearW: () => 1500 })
    const made = finite(day)
    expect(made).not.toBeNull()
    for (let i = 1; i <= day.pieces; i++) expect(made?.track.arrivalJ[i]).toBeGreaterThanOrEqual(500 * WH)
    expect(bestDrive(plainDay({ openingWh: 300, targetWh: 900, lengthKm: 40, clearW: () => 100 }))).toBeNull()
  })

  it('keeps the hours of a stop: closed, none; open late, left when it has opened', () => {
    const stop = (closesS: number, opensS: number) => {
      const day = plainDay({ lengthKm: 100, openingWh: 5000, targetWh: 500, stopsKm: [50] })
      const lengthS = day.stops[0].lengthS.map((_, k) => Math.max(opensS - (day.clock.from + k * day.clock.step), 1800))
      day.stops[0] = { ...day.stops[0], lengthS, closesS }
      return day
    }
    const open = stop(Number.POSITIVE_INFINITY, 0)
    const freeS = endOf(open, finite(open))
    const closed = stop(STARTS_S + 60, 0)
    expect(bestDrive(closed)).toBeNull()
    const late = stop(Number.POSITIVE_INFINITY, STARTS_S + 3 * 3600)
    const made = finite(late)
    expect(made?.track.atS[50]).toBeCloseTo(STARTS_S + 3 * 3600, 0)
    expect(endOf(late, made)).toBeGreaterThan(freeS)
  })

  it('waits where waiting brings what the road lacks', () => {
    // Dark from 09:00 on everywhere but in 2,000 W at the start: 60 km take more than the pack has.
    const day = plainDay({ lengthKm: 60, openingWh: 700, targetWh: 500, capacityWh: 5000 }, (piece) =>
      piece === 0 ? 2000 : 0,
    )
    const made = finite(day)
    expect(made).not.toBeNull()
    const waited = made?.drive.waitS.reduce((sum, s) => sum + s, 0) ?? 0
    const driving = (made?.drive.speedMps[0] ?? 1) < 31 / 3.6
    expect(waited > 0 || driving).toBe(true)
    expect(made?.track.duskJ).toBeGreaterThanOrEqual(500 * WH)
  })
})
