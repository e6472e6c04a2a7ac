import { type DayTables, rowAt } from '../../../server/engine/planner/day-tables.ts'
import { simulate, type Track } from '../../../server/engine/planner/simulate.ts'
import { uniform } from './cloudy-day.ts'

/** What a small day may bring besides road and sun. */
export interface SmallWants {
  pieces: number
  hasStop?: boolean
  /** The stop opens so late that early cars stand longer. */
  opensLate?: boolean
  stopAtEnd?: boolean
  hasMotion?: boolean
  hasExtra?: boolean
}

const START_S = 8 * 3600
const CEILING_J = 3_600_000

/**
 * A random day of a few pieces of some kilometres each, with an efficient pack: loads that need not be convex, sun that
 * jumps about, a floor that changes from place to place.
 */
export function smallDay(seed: number, wants: SmallWants): DayTables {
  const next = uniform(seed)
  const between = (low: number, high: number): number => low + (high - low) * next()
  const n = wants.pieces
  const clock = { from: START_S, step: 600, count: 40 }
  const speeds = { from: 25 / 3.6, step: 5 / 3.6, count: 20 }
  const column = (length: number, value: (i: number) => number): Float64Array =>
    Float64Array.from({ length }, (_, i) => value(i))
  const row = (value: (s: number) => number): Float64Array =>
    column(clock.count, (k) => value(clock.from + k * clock.step))
  const lengthM = column(n, () => between(2000, 9000))
  const grades = column(n, () => between(-0.02, 0.02))
  const bumpW = column(n, () => (next() < 0.3 ? between(0, 60) : 0))
  const loadW = column(n * speeds.count, (at) => {
    const i = Math.floor(at / speeds.count)
    const v = speeds.from + (at % speeds.count) * speeds.step
    const N = 250 * 9.80665 * (0.0035 + grades[i]) + 0.0585 * v * v
    return 30 + (N > 0 ? N / 0.96 : N * 0.7) * v + bumpW[i] * Math.sin(v / 2)
  })
  const longest = lengthM.reduce((sum, M) => sum + M, 0) / (25 / 3.6)
  const harvestW = column(n * clock.count, () => between(0, 1000))
  const opensS = START_S + between(0.5, 1) * (longest / 3)
  const lengthS = row((s) => (wants.opensLate === true ? Math.max(opensS - s, 600) : 600))
  const beforePiece = wants.stopAtEnd === true ? n : 1 + Math.floor(next() * (n - 1))
  const gainPerS = between(-100, 900)
  const floorJ = column(n + 1, () => between(300_000, 700_000))
  return {
    pieces: n,
    lengthM,
    extraS: column(n, (i) => (wants.hasExtra === true ? between(-0.1, 0.3) * (lengthM[i] / 20) : 0)),
    extraJ: column(n, () => (wants.hasExtra === true ? between(-5000, 20_000) : 0)),
    fastestMps: column(n, () => between(50, 110) / 3.6),
    slowestMps: 30 / 3.6,
    speeds,
    loadW,
    clock,
    harvestW,
    waitingLoadW: 20,
    kinetic:
      wants.hasMotion === true
        ? { massKg: 260, perGained: 1.15, perLost: 0.7 }
        : { massKg: 0, perGained: 1, perLost: 1 },
    stops:
      wants.hasStop === true || wants.stopAtEnd === true
        ? [{ beforePiece, lengthS, gainJ: lengthS.map((s) => s * gainPerS), closesS: Number.POSITIVE_INFINITY }]
        : [],
    duskGainJ: row((s) => 900_000 - between(20, 120) * (s - START_S) * 0.3),
    pack: {
      ceilingJ: wants.hasMotion === true ? CEILING_J / 3 : CEILING_J,
      lossPerW: 0.1164 / (109.8 * 109.8),
      coulombic: between(0.97, 1),
    },
    floorJ,
    start: { atS: START_S, energyJ: between(700_000, 1_300_000) },
    latestS: START_S + 3 * longest,
    targetJ: between(500_000, 1_500_000),
  }
}

/** What a tight day holds the car back by, besides its target. */
export type Bind = 'target' | 'floor' | 'ceiling' | 'all'

/** The same day under a cloud front that passes over the road, by the minute. */
function underFront(day: DayTables, next: () => number): DayTables {
  const between = (low: number, high: number): number => low + (high - low) * next()
  const clock = { from: day.clock.from, step: 60, count: (day.clock.count - 1) * 10 + 1 }
  const row = (value: (s: number) => number): Float64Array =>
    Float64Array.from({ length: clock.count }, (_, k) => value(clock.from + k * clock.step))
  const finer = (of: Float64Array): Float64Array => row((s) => rowAt(of, 0, day.clock, s))
  const roadM = day.lengthM.reduce((sum, M) => sum + M, 0)
  const clearW = between(700, 1000)
  const depth = between(0.4, 0.95)
  const [atM, atS] = [between(0, roadM), day.start.atS + between(0, roadM / 15)]
  const driftMps = between(-18, 22)
  const halfWidthM = between(3000, 12_000)
  const harvestW = new Float64Array(day.pieces * clock.count)
  let middleM = 0
  for (let i = 0; i < day.pieces; i++) {
    middleM += day.lengthM[i] / 2
    const M = middleM
    const offOf = (s: number): number => (M - atM - driftMps * (s - atS)) / halfWidthM
    harvestW.set(
      row((s) => clearW * (1 - depth * Math.exp(-(offOf(s) ** 2)))),
      i * clock.count,
    )
    middleM += day.lengthM[i] / 2
  }
  const stops = day.stops.map((stop) => ({
    ...stop,
    lengthS: finer(stop.lengthS),
    // A lifted array takes in more than a flat one: nothing is won by waiting in front of the stop.
    gainJ: finer(stop.lengthS).map((S) => S * 1.1 * clearW),
  }))
  return { ...day, clock, harvestW, stops, duskGainJ: finer(day.duskGainJ) }
}

/**
 * A small day on which energy is short: its target is what a drive at even speeds just meets; the floor touches that
 * drive at one place, or its pack is too small for it.
 */
export function tightDay(seed: number, wants: SmallWants, bind: Bind): DayTables {
  const next = uniform(90_000 + seed)
  const wide = underFront(smallDay(seed, wants), next)
  const n = wide.pieces
  const share = 0.25 + 0.5 * next()
  const speedMps = wide.fastestMps.map((fastest) => wide.slowestMps + share * (fastest - wide.slowestMps))
  const driven = (day: DayTables): Track => simulate(day, { speedMps, waitS: new Float64Array(n + 1) })
  const free = { ...wide, floorJ: new Float64Array(n + 1), targetJ: 0, pack: { ...wide.pack, ceilingJ: WIDE_J } }
  const first = driven(free)
  const highestJ = first.energyJ.reduce((most, J) => Math.max(most, J), first.duskJ)
  const isSmall = bind === 'ceiling' || bind === 'all'
  const ceilingJ = isSmall ? Math.max(highestJ - 150_000 * next(), free.start.energyJ) : WIDE_J
  const day = { ...free, pack: { ...wide.pack, ceilingJ } }
  const track = driven(day)
  const edge = 1 + Math.floor(next() * n)
  const floorJ =
    bind === 'floor' || bind === 'all'
      ? track.arrivalJ.map((J, i) => (i === edge ? J - 1000 : J - 200_000 * next()))
      : day.floorJ
  return { ...day, floorJ, targetJ: Math.min(track.duskJ - (bind === 'floor' ? 100_000 : 0), ceilingJ - 20_000) }
}

/** A ceiling that nothing reaches. [J] */
const WIDE_J = 7_200_000
