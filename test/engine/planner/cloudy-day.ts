import type { DayTables } from '../../../server/engine/planner/day-tables.ts'

/** Uniform numbers from a seed (mulberry32). */
export function uniform(seed: number): () => number {
  let state = seed >>> 0
  return () => {
    state = (state + 0x6d2b79f5) | 0
    let t = Math.imul(state ^ (state >>> 15), 1 | state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return ((t ^ (t >>> 14)) >>> 0) / 4_294_967_296
  }
}

const HOUR = 3600
const WH = 3600
const PIECE_M = 1000

/** A cloud front along the road: where its middle stands when, how it moves, how wide and deep it is. */
interface Front {
  centreM: number
  atS: number
  driftMps: number
  halfWidthM: number
  depth: number
}

/** The parts of an invented day that tests set themselves. */
export interface DayParts {
  lengthKm: number
  /** Grade as a share, by piece. */
  grade: (piece: number) => number
  limitKmh: (km: number) => number
  stopsKm: number[]
  headwindMps: number
  fronts: Front[]
  openingWh: number
  capacityWh: number
  targetWh: number
  reserveWh: number
  /** Power of the sun on a clear day at the trackers' outputs. [W] */
  clearW: (atS: number) => number
  lossPerW: number
  clockStepS: number
}

export const STARTS_S = 8 * HOUR
export const ENDS_S = 17.5 * HOUR
const DUSK_S = 18.5 * HOUR

/** A sun that rises at 6 and sets at 18:30: 1,050 W at its highest. */
export const clearDayW = (atS: number): number => {
  const share = Math.sin((Math.PI * (atS - 6 * HOUR)) / (12.5 * HOUR))
  return share > 0 ? 1050 * share ** 1.15 : 0
}

/** The invented car of the hand-worked cases: 250 kg, CdA 0.10 m², Crr 0.0035, η 0.96, 30 W besides. */
export function carLoadW(speedMps: number, grade: number, headwindMps: number): number {
  const along = speedMps + headwindMps
  const N = 250 * 9.80665 * (0.0035 + grade) + 0.5 * 1.17 * 0.1 * Math.abs(along) * along
  return 30 + (N > 0 ? (N * speedMps) / 0.96 : N * speedMps * 0.7)
}

/** A day as tables. */
export function dayOf(parts: DayParts): DayTables {
  const pieces = Math.round(parts.lengthKm)
  const clock = {
    from: STARTS_S,
    step: parts.clockStepS,
    count: Math.round((DUSK_S - STARTS_S) / parts.clockStepS) + 1,
  }
  const speeds = { from: 20 / 3.6, step: 2 / 3.6, count: 56 }
  const at = (k: number): number => clock.from + k * clock.step
  const sunW = (m: number, s: number): number =>
    parts.fronts.reduce((W, f) => {
      const off = (m - f.centreM - f.driftMps * (s - f.atS)) / f.halfWidthM
      return W * (1 - f.depth * Math.exp(-off * off))
    }, parts.clearW(s))
  const loadW = new Float64Array(pieces * speeds.count)
  const harvestW = new Float64Array(pieces * clock.count)
  for (let i = 0; i < pieces; i++) {
    for (let j = 0; j < speeds.count; j++)
      loadW[i * speeds.count + j] = carLoadW(speeds.from + j * speeds.step, parts.grade(i), parts.headwindMps)
    for (let k = 0; k < clock.count; k++) harvestW[i * clock.count + k] = sunW((i + 0.5) * PIECE_M, at(k))
  }
  const gain = (m: number, fromS: number, toS: number, gainFactor: number): number => {
    let J = 0
    const n = 24
    for (let q = 0; q < n; q++) {
      const W = gainFactor * sunW(m, fromS + ((q + 0.5) * (toS - fromS)) / n) - 10
      J += ((W - W * W * parts.lossPerW) * (toS - fromS)) / n
    }
    return J
  }
  const row = (value: (s: number) => number): Float64Array =>
    Float64Array.from({ length: clock.count }, (_, k) => value(at(k)))
  return {
    pieces,
    lengthM: new Float64Array(pieces).fill(PIECE_M),
    extraS: new Float64Array(pieces),
    extraJ: new Float64Array(pieces),
    fastestMps: Float64Array.from({ length: pieces }, (_, i) => parts.limitKmh(i + 0.5) / 3.6),
    slowestMps: 30 / 3.6,
    speeds,
    loadW,
    clock,
    harvestW,
    waitingLoadW: 10,
    kinetic: { massKg: 0, perGained: 1, perLost: 1 },
    stops: parts.stopsKm.map((km) => ({
      beforePiece: km,
      lengthS: row(() => 1800),
      gainJ: row((s) => gain(km * 1000, s, s + 1800, 1.35)),
      closesS: Number.POSITIVE_INFINITY,
    })),
    duskGainJ: row((s) => gain(pieces * 1000, s, Math.max(DUSK_S, s), 1.5)),
    pack: { ceilingJ: parts.capacityWh * WH, lossPerW: parts.lossPerW, coulombic: 1 },
    floorJ: new Float64Array(pieces + 1).fill(parts.reserveWh * WH),
    start: { atS: STARTS_S, energyJ: parts.openingWh * WH },
    latestS: ENDS_S,
    targetJ: parts.targetWh * WH,
  }
}

/** Twelve ramps up and down, 6 to 14 km long, 150 to 420 m high. */
const RAMPS = Array.from({ length: 12 }, (_, r) => ({
  atKm: 25 + r * 46,
  lengthKm: 6 + ((r * 5) % 9),
  heightM: 150 + ((r * 97) % 271),
  isUp: r % 2 === 0,
}))

/** A random cloudy day: hills, limits, wind, one to three fronts, two stops of half an hour. */
export function cloudyDay(seed: number, isHard = false, clockStepS = 60): DayTables {
  const next = uniform(seed)
  const between = (low: number, high: number): number => low + (high - low) * next()
  const lengthKm = Math.round(between(420, 620))
  const hills = between(0.3, 1.5)
  const zones = Array.from({ length: 7 }, () => ({
    fromKm: between(0, lengthKm - 8),
    lengthKm: between(1, 6),
    kmh: between(50, 90),
  }))
  const headwindMps = between(0, 6) * Math.cos(between(0, 2 * Math.PI))
  const fronts = Array.from({ length: 1 + Math.floor(next() * 3) }, () => ({
    centreM: between(0, 600_000),
    atS: between(8, 15) * HOUR,
    driftMps: between(-18, 22),
    halfWidthM: isHard ? between(8000, 30_000) : between(15_000, 80_000),
    depth: isHard ? between(0.75, 0.97) : between(0.3, 0.9),
  }))
  return dayOf({
    lengthKm,
    grade: (piece) => {
      const ramp = RAMPS.find((r) => piece >= r.atKm && piece < r.atKm + r.lengthKm)
      return ramp === undefined ? 0 : ((ramp.isUp ? 1 : -1) * hills * ramp.heightM) / (ramp.lengthKm * 1000)
    },
    limitKmh: (km) =>
      zones.reduce((kmh, z) => (km >= z.fromKm && km < z.fromKm + z.lengthKm ? Math.min(kmh, z.kmh) : kmh), 110),
    stopsKm: [180, 420].filter((km) => km < lengthKm),
    headwindMps,
    fronts,
    openingWh: between(2200, 5000),
    capacityWh: 5000,
    targetWh: between(900, 3300),
    reserveWh: 500,
    clearW: clearDayW,
    lossPerW: 0.1164 / (109.8 * 109.8),
    clockStepS,
  })
}
