import { describe, expect, it } from 'vitest'
import { courseOf, members } from '../../../server/engine/ensemble/members.ts'
import { normals } from '../../../server/engine/ensemble/normals.ts'
import { rangeAt, rangeOf, sharesOfSpread } from '../../../server/engine/ensemble/ranges.ts'
import { robustPlan } from '../../../server/engine/ensemble/robust.ts'
import { CAUSES, skySpread, type Spreads } from '../../../server/engine/ensemble/spread.ts'
import { bestDrive } from '../../../server/engine/planner/best-drive.ts'
import type { DayTables } from '../../../server/engine/planner/day-tables.ts'
import type { Refined } from '../../../server/engine/planner/refine.ts'
import { simulate } from '../../../server/engine/planner/simulate.ts'
import { cloudyDay, dayOf } from './cloudy-day.ts'
import { SURE } from './sure.ts'

const WH = 3600
const USUAL: Spreads = {
  ...SURE,
  sunDay: 0.03,
  sunWander: 0.15,
  headwindMps: 0.8,
  roadLoad: 0.03,
  trackers: 0.005,
  openingJ: 50 * WH,
}

/** A flat day driven at 72 km/h under 1,000 W: 50 s a piece. No loss, so that energy is linear in what differs. */
const LONG = dayOf({
  lengthKm: 200,
  grade: () => 0,
  limitKmh: () => 110,
  stopsKm: [],
  headwindMps: 0,
  fronts: [],
  openingWh: 10_000,
  capacityWh: 20_000,
  targetWh: 500,
  reserveWh: 500,
  clearW: () => 1000,
  lossPerW: 0,
  clockStepS: 60,
})
const PLAIN: DayTables = { ...LONG, duskGainJ: new Float64Array(LONG.clock.count) }
const lay = (day: DayTables, speedMps: Float64Array, spreads: Spreads, mostSun = 10) =>
  courseOf(
    day,
    { speedMps, waitS: new Float64Array(day.pieces + 1) },
    {
      clearW: new Float64Array(day.pieces).fill(1000 * mostSun),
      perHeadwind: new Float64Array(day.pieces).fill(60),
      spreads,
    },
  )
const steady = new Float64Array(PLAIN.pieces).fill(20)

const mean = (values: number[]): number => values.reduce((sum, value) => sum + value, 0) / values.length
const product = (a: number[], b: number[]): number => mean(a.map((value, i) => value * b[i])) - mean(a) * mean(b)
const sd = (values: number[]): number =>
  Math.sqrt(
    product(
      values.map((v) => v - values[0]),
      values.map((v) => v - values[0]),
    ),
  )
const correlation = (a: number[], b: number[]): number => product(a, b) / (sd(a) * sd(b))

/** Factors on the sun at a piece, member by member, from what the energies at its two edges say. */
function factorsAt(spreads: Spreads, piece: number, count: number, mostSun = 10): number[] {
  const course = lay(PLAIN, steady, spreads, mostSun)
  const { energyJ } = members(course, spreads, count, 11)
  return Array.from({ length: count }, (_, m) => {
    const at = m * (PLAIN.pieces + 1) + piece
    return (energyJ[at + 1] - energyJ[at]) / (1000 * 50) + course.loadW[piece] / 1000
  })
}

describe('normal numbers', () => {
  it('have mean 0, spread 1, no skew, the tails of a normal, and no memory', () => {
    const drawn = new Float64Array(200_000)
    normals(5)(drawn)
    const values = [...drawn]
    expect(Math.abs(mean(values))).toBeLessThan(0.01)
    expect(Math.abs(sd(values) - 1)).toBeLessThan(0.01)
    expect(Math.abs(mean(values.map((x) => x ** 3)))).toBeLessThan(0.03)
    expect(Math.abs(mean(values.map((x) => x ** 4)) - 3)).toBeLessThan(0.08)
    // Beyond 1.96 lie 5.00 % of a normal (tables).
    expect(Math.abs(values.filter((x) => Math.abs(x) > 1.96).length / values.length - 0.05)).toBeLessThan(0.002)
    expect(Math.abs(correlation(values.slice(1), values.slice(0, -1)))).toBeLessThan(0.01)
  })
})

describe('the sun of the members', () => {
  const spreads = { ...SURE, sunDay: 0.05, sunWander: 0.12 }

  it('has the forecast for its mean and both spreads together, at every piece', () => {
    for (const piece of [0, 90, 199]) {
      const factors = factorsAt(spreads, piece, 8000)
      expect(Math.abs(mean(factors) - 1)).toBeLessThan(0.006)
      expect(Math.abs(sd(factors) / Math.hypot(0.05, 0.12) - 1)).toBeLessThan(0.03)
    }
  })

  it('forgets over time and way as it should: e^(−Δt/90 min − Δx/150 km)', () => {
    const first = factorsAt({ ...SURE, sunWander: 0.12 }, 60, 8000)
    for (const ahead of [10, 40, 100]) {
      const later = factorsAt({ ...SURE, sunWander: 0.12 }, 60 + ahead, 8000)
      const expected = Math.exp((-ahead * 50) / 5400 - (ahead * 1000) / 150_000)
      expect(Math.abs(correlation(first, later) - expected)).toBeLessThan(0.03)
    }
  })

  it('never outshines the clear sky', () => {
    const factors = factorsAt({ ...SURE, sunWander: 0.3 }, 80, 4000, 1.1)
    expect(Math.max(...factors)).toBeLessThan(1.1 + 1e-3)
    // A normal of 0.3 around 1 lies above 1.1 with 36.9 % (tables): all of them stand at the clear sky.
    const clipped = factors.filter((factor) => factor > 1.0985).length / factors.length
    expect(Math.abs(clipped - 0.369)).toBeLessThan(0.03)
    expect(Math.min(...factors)).toBeGreaterThan(0)
  })
})

describe('the ranges', () => {
  const course = lay(PLAIN, steady, USUAL)

  it('come back the same from the same seed, and differ with another', () => {
    const one = members(course, USUAL, 300, 4)
    expect(members(course, USUAL, 300, 4).duskJ).toEqual(one.duskJ)
    expect(members(course, USUAL, 300, 5).duskJ).not.toEqual(one.duskJ)
  })

  it('have the spread worked by hand for causes that hold all day', () => {
    // 10,000 s on the road: 3 % of the road's load, 60 W a m/s of headwind, half a per cent of 1,000 W, 50 Wh.
    const alone: [(typeof CAUSES)[number], number][] = [
      ['road', (0.03 * course.loadW[0] * 10_000) / WH],
      ['wind', (0.8 * 60 * 10_000) / WH],
      ['opening', 50],
      ['trackers', (0.005 * (1000 * 10_000 + course.duskJ)) / WH],
    ]
    for (const [cause, expectedWh] of alone) {
      const { duskJ } = members(course, USUAL, 6000, 3, cause)
      expect(Math.abs(sd([...duskJ]) / WH / expectedWh - 1), cause).toBeLessThan(0.04)
    }
  })

  it('of 2,000 members wander by no more than a twentieth of their width from seed to seed', () => {
    const all = Array.from({ length: 20 }, (_, seed) => rangeOf(members(course, USUAL, 2000, seed + 1).duskJ))
    const width = mean(all.map(({ p10, p90 }) => p90 - p10))
    for (const key of ['p10', 'p50', 'p90'] as const)
      expect(sd(all.map((range) => range[key])) / width).toBeLessThan(0.05)
  })

  it('part into causes that sum to 1; a cause alone is all of it; nothing is nothing', () => {
    const sharesOf = (spreads: Spreads, count: number) => sharesOfSpread(course, spreads, count, 1)
    const usual = sharesOf(USUAL, 500)
    expect(usual.map(({ cause }) => cause)).toEqual([...CAUSES])
    expect(usual.reduce((sum, { share }) => sum + share, 0)).toBeCloseTo(1, 12)
    for (const { share } of usual) expect(share).toBeGreaterThan(0)
    for (const { cause, share } of sharesOf({ ...SURE, headwindMps: 1 }, 200))
      expect(share).toBeCloseTo(cause === 'wind' ? 1 : 0, 9)
    expect(sharesOf(SURE, 100).map(({ share }) => share)).toEqual([0, 0, 0, 0, 0])
  })

  it('are a point where nothing differs, that of the plan itself at every edge: stops, changes of speed, full pack', () => {
    for (const ceilingWh of [20_000, 4000]) {
      const cloudy = cloudyDay(9)
      const day = {
        ...cloudy,
        kinetic: { massKg: 260, perGained: 1.1, perLost: 0.5 },
        pack: { ...cloudy.pack, ceilingJ: ceilingWh * WH },
        extraJ: cloudy.extraJ.map((_, i) => 50 * (i % 7)),
      }
      const drive = {
        speedMps: day.fastestMps.map((fastest, i) => Math.min(fastest, 17 + 3 * Math.sin(i))),
        waitS: new Float64Array(day.pieces + 1),
      }
      const track = simulate(day, drive)
      const of = members(lay(day, drive.speedMps, SURE), SURE, 3, 1)
      for (let edge = 0; edge <= day.pieces; edge++) {
        // Ranges are of arrivals, and kept in single precision.
        const { p10, p90 } = rangeAt(of, day.pieces, edge)
        expect(Math.abs(p10 - track.arrivalJ[edge]) / WH, `edge ${edge}`).toBeLessThan(0.001)
        expect(p90).toBe(p10)
      }
      expect(Math.abs(of.duskJ[1] - track.duskJ) / WH).toBeLessThan(0.001)
      expect(Math.max(...track.arrivalJ) === day.pack.ceilingJ).toBe(ceilingWh === 4000)
    }
  })

  it('of stops, harvest and a cloudy day’s close wander no more from seed to seed', () => {
    const of = cloudyDay(9)
    const day = { ...of, pack: { ...of.pack, ceilingJ: 20_000 * WH } }
    const cloudy = lay(
      day,
      day.fastestMps.map((fastest) => Math.min(fastest, 68 / 3.6)),
      USUAL,
      1.1,
    )
    const all = Array.from({ length: 20 }, (_, seed) => {
      const drawn = members(cloudy, USUAL, 2000, 100 + seed)
      const at = (edge: number) => rangeAt(drawn, day.pieces, edge)
      return [at(180), at(300), rangeOf(drawn.harvestJ), rangeOf(drawn.duskJ)]
    })
    for (let figure = 0; figure < 4; figure++) {
      const ranges = all.map((of) => of[figure])
      const width = mean(ranges.map(({ p10, p90 }) => p90 - p10))
      expect(width).toBeGreaterThan(50 * WH)
      for (const key of ['p10', 'p50', 'p90'] as const)
        expect(sd(ranges.map((range) => range[key])) / width).toBeLessThan(0.05)
    }
  })
})

describe('the sky’s spread', () => {
  it('grows with the lead and is widest under broken cloud', () => {
    for (const clearness of [0, 0.5, 0.8, 1]) {
      for (let hours = 1; hours < 48; hours++)
        expect(skySpread(hours * 3600, clearness)).toBeGreaterThan(skySpread((hours - 1) * 3600, clearness))
    }
    expect(skySpread(86_400, 0.5)).toBeGreaterThan(4 * skySpread(86_400, 1))
    expect(skySpread(86_400, 0.5)).toBeLessThanOrEqual(0.3)
  })

  // Common practice, no source: under broken cloud some 10 % an hour ahead, 25 to 30 % a day ahead.
  it('is as commonly found under broken cloud, and a stamp from the future counts as one of now', () => {
    expect(skySpread(3600, 0.5)).toBeGreaterThan(0.09)
    expect(skySpread(3600, 0.5)).toBeLessThan(0.14)
    expect(skySpread(86_400, 0.5)).toBeGreaterThan(0.25)
    expect(skySpread(-3600, 0.5)).toBe(skySpread(0, 0.5))
  })
})

describe('a robust plan', () => {
  const promise = 0.05
  const chance = promise + 2 * Math.sqrt((promise * (1 - promise)) / 2000)

  // Days on which plans chosen by the members alone touched it on up to 6.1 % of others.
  it.each([1, 3, 8, 9, 11])('touches the reserve no more often than promised, on days it has not seen: %i', (seed) => {
    const kinetic = { massKg: 260, perGained: 1.05, perLost: 0.45 }
    const cloudy = cloudyDay(seed, seed % 3 === 0)
    const day = { ...cloudy, targetJ: 510 * WH, kinetic: seed % 2 === 0 ? kinetic : cloudy.kinetic }
    const layOut = (refined: Refined) =>
      courseOf(day, refined.drive, {
        clearW: new Float64Array(day.pieces).fill(1050),
        perHeadwind: new Float64Array(day.pieces).fill(60),
        spreads: USUAL,
      })
    const touchedBy = (refined: Refined): number =>
      members(layOut(refined), USUAL, 2000, 424_242).spareJ.filter((J) => J <= 0).length / 2000
    const start = bestDrive(day) as Refined
    expect(touchedBy(start)).toBeGreaterThan(0.2)
    const robust = robustPlan(day, start, layOut, { spreads: USUAL, promise, seed: 1 })
    expect(touchedBy(robust.refined)).toBeLessThanOrEqual(chance)
    expect(touchedBy(robust.refined)).toBeGreaterThan(0.005)
    expect(robust.costS).toBeGreaterThan(0)
    // Safer than promised by a little, not by driving slowly for nothing.
    expect(robust.touches).toBeGreaterThan(0.4 * promise)
  })
})
