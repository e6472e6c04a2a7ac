import { openCircuitV, storedJ } from '../battery.ts'
import { attainableSpeedMps, wheelToBus } from '../drive.ts'
import type { DayRules } from '../day-rules.ts'
import type { DayForecast, Race } from '../forecast.ts'
import { type Going, holdingN } from '../road.ts'
import { emptySteps } from '../steps.ts'
import { type SunPath, sunPath } from '../sun.ts'
import type { Axis, DayTables, Kinetic, TablePack, TableStop } from './day-tables.ts'
import { evening, isAtEnd, stopsOf } from './stands-ahead.ts'
import { sunOnBusW } from './sun-on-bus.ts'

/** A day to be planned, with a forecast of it that the tables are taken along. */
export interface Along {
  race: Race
  dayIndex: number
  base: DayForecast
  path: SunPath
  /** Usable charge wanted when the day closes, 0..1. */
  targetCharge: number
}

/** Which pieces of the course the day may drive. */
export interface Reach {
  first: number
  count: number
}

/** Step of the clock: light between is straight. [S] */
const CLOCK_S = 600
/** The road's sun is worked out every so many of those steps; it is straight between. */
const SUN_STEPS = 2
/** The same where plans are only begun. */
const ROUGH_SUN_STEPS = 6
/** How far from the base forecast's passage the sun on a piece is worked out; beyond, its last value holds. [S] */
const WINDOW_S = 7200
/** A forecast that passes a piece nearer than this is met by its sun. [S] */
const NEAR_S = 1800
/** What rounding and halts may add to the earliest and the latest passage. [S] */
const PASSAGE_SPARE_S = 600
const SLOWEST_MPS = 25 / 3.6
const SPEED_STEP_MPS = 2 / 3.6
/** Speeds beyond this are not planned. [Mps] */
const FASTEST_MPS = 140 / 3.6

/** The sun over a day and the last step of the clock. */
export const planSun = (day: DayRules): SunPath => sunPath(day.opensMs, day.closesMs + CLOCK_S * 1000)

/** The pieces from where the car stands to the end of the last stage that the day may drive. */
export function reachOf({ race, dayIndex, base }: Along): Reach {
  const { course, days } = race
  const placeM = base.timetable.spans[0]?.fromM ?? base.timetable.evening.placeM
  const endPiece = days[dayIndex].lastStage < 0 ? 0 : course.stages[days[dayIndex].lastStage].endPiece
  const { fromM, lengthM } = course.pieces
  let first = 0
  while (first < endPiece && fromM[first] + lengthM[first] <= placeM + 1e-6) first++
  return { first, count: endPiece - first }
}

/** What the sun brings over a day: on the road where and when it may be driven, at stops, in the evening. */
export interface SunAhead extends Pick<DayTables, 'clock' | 'harvestW' | 'stops' | 'duskGainJ'> {
  /** When the base forecast passed each piece. [S] (pieces of the day) */
  passedS: Float64Array
  isRough: boolean
}

/**
 * The sun of a day, from the engine with light, air and the pack's voltage as they are where and when a forecast passes.
 *
 * @param untilS   arrivals at the end of the day's road after this are of no interest. [S]
 * @param isRough  in wider steps, for a plan that is only begun
 */
export function sunAhead(along: Along, reach: Reach, untilS = Number.POSITIVE_INFINITY, isRough = false): SunAhead {
  const { race, dayIndex, base } = along
  const day = race.days[dayIndex]
  const clock = clockFrom(startOf(along).atS, (day.closesMs - day.opensMs) / 1000)
  const pack = packOf(race, base)
  const stops = stopsOf(along, reach, clock, pack)
  const passed = passages(along, reach)
  const window = passable(along, reach, stops, Math.min(untilS, (day.drivingToMs - day.opensMs) / 1000))
  return {
    clock,
    passedS: passed.atS,
    stops,
    harvestW: harvests(along, reach, clock, { ...passed, ...window }, isRough ? ROUGH_SUN_STEPS : SUN_STEPS),
    duskGainJ: evening(along, reach, clock, pack),
    isRough,
  }
}

/** Whether a forecast passes everywhere so near the one a sun was worked out along that it holds for it too. */
export function isNear(sun: SunAhead, along: Along, reach: Reach): boolean {
  if (sun.isRough) return false
  const { atS } = passages(along, reach)
  return sun.passedS.every((s, i) => Math.abs(s - atS[i]) < NEAR_S)
}

/**
 * The tables of a day, taken from the engine along a forecast.
 *
 * @param sun  where the forecast passes near enough to the one that it was worked out along
 */
export function tablesAlong(along: Along, reach: Reach, sun = sunAhead(along, reach)): DayTables {
  const { race, dayIndex, base, targetCharge } = along
  const { car, course, days } = race
  const day = days[dayIndex]
  const placeM = base.timetable.spans[0]?.fromM ?? base.timetable.evening.placeM
  const lengthM = course.pieces.lengthM.slice(reach.first, reach.first + reach.count)
  if (reach.count > 0) lengthM[0] = course.pieces.fromM[reach.first] + lengthM[0] - placeM
  return {
    pieces: reach.count,
    lengthM,
    extraS: new Float64Array(reach.count),
    extraJ: new Float64Array(reach.count),
    slowestMps: SLOWEST_MPS,
    speeds: SPEEDS,
    ...loads(along, reach, SPEEDS),
    clock: sun.clock,
    harvestW: sun.harvestW,
    waitingLoadW: car.auxDrivingW,
    kinetic: kineticOf(race),
    stops: sun.stops.map((stop) => ({ ...stop, gainJ: stop.gainJ.slice() })),
    duskGainJ: sun.duskGainJ.slice(),
    pack: packOf(race, base),
    floorJ: new Float64Array(reach.count + 1).fill(Math.min(storedJ(car.pack, car.reserveCharge), base.openingJ)),
    start: startOf(along),
    // A stop at the end is asked on arrival; between two steps of the clock it may seem to go on past the hours.
    latestS: (day.drivingToMs - day.opensMs) / 1000 + (sun.stops.some(isAtEnd(reach)) ? CLOCK_S : 0),
    targetJ: storedJ(car.pack, targetCharge),
  }
}

const SPEEDS: Axis = {
  from: SLOWEST_MPS,
  step: SPEED_STEP_MPS,
  count: Math.ceil((FASTEST_MPS - SLOWEST_MPS) / SPEED_STEP_MPS) + 1,
}

/** When the car sets off, and with how much. */
function startOf({ race, dayIndex, base }: Along): DayTables['start'] {
  const { opensMs, drivingFromMs } = race.days[dayIndex]
  const firstDrive = base.timetable.spans.findIndex((span) => span.kind === 'drive')
  const fromMs = firstDrive < 0 ? drivingFromMs : base.timetable.spans[firstDrive].fromMs
  return { atS: (fromMs - opensMs) / 1000, energyJ: energyBefore(base, firstDrive) }
}

function clockFrom(startS: number, closesS: number): Axis {
  return { from: startS, step: CLOCK_S, count: Math.max(Math.ceil((closesS - startS) / CLOCK_S) + 1, 2) }
}

/** One resistance and one voltage for all the day: what they leave out is set right along the forecast. */
function packOf({ car }: Race, base: DayForecast): TablePack {
  const { pack } = car
  const volts = openCircuitV(pack, base.openingCharge)
  return {
    ceilingJ: storedJ(pack, 1),
    lossPerW: pack.resistanceOhm / (volts * volts),
    coulombic: pack.coulombicEfficiency,
  }
}

function energyBefore(base: DayForecast, span: number): number {
  const step = span < 0 ? base.steps.count : base.steps.span.indexOf(span)
  return step > 0 ? base.balance.storedJ[step - 1] : base.openingJ
}

/** When the base forecast passes each piece, and the pack's voltage then; beyond its end at the pace before. */
function passages({ base, race, dayIndex }: Along, reach: Reach): { atS: Float64Array; packV: Float64Array } {
  const { steps, balance } = base
  const { opensMs } = race.days[dayIndex]
  const atS = new Float64Array(reach.count).fill(Number.NaN)
  const packV = new Float64Array(reach.count)
  for (let i = 0; i < steps.count; i++) {
    const piece = steps.piece[i] - reach.first
    if (steps.speedMps[i] === 0 || piece < 0 || piece >= reach.count) continue
    if (Number.isNaN(atS[piece])) atS[piece] = (steps.atMs[i] - opensMs) / 1000
    packV[piece] = balance.packV[i]
  }
  let lastS = (race.days[dayIndex].drivingFromMs - opensMs) / 1000
  let lastV = openCircuitV(race.car.pack, base.openingCharge)
  for (let piece = 0; piece < reach.count; piece++) {
    if (Number.isNaN(atS[piece])) {
      atS[piece] = lastS + race.course.pieces.lengthM[reach.first + piece] / SOME_SPEED_MPS
      packV[piece] = lastV
    }
    lastS = atS[piece]
    lastV = packV[piece]
  }
  return { atS, packV }
}

/** Pace at which the road beyond the base forecast's end is met. [Mps] */
const SOME_SPEED_MPS = 20

/** The earliest that each piece can be passed, and the latest with which the end is still reached in time. [S] */
function passable(
  along: Along,
  reach: Reach,
  stops: TableStop[],
  untilS: number,
): { earliestS: Float64Array; latestS: Float64Array } {
  const { lengthM } = along.race.course.pieces
  const shortestS = fastestOn(along, reach).map((mps, i) => lengthM[reach.first + i] / mps)
  const stopS = new Float64Array(reach.count + 1)
  for (const { beforePiece, lengthS } of stops) stopS[beforePiece] += lengthS.reduce((a, b) => Math.min(a, b))
  const earliestS = new Float64Array(reach.count)
  const latestS = new Float64Array(reach.count)
  let s = startOf(along).atS - PASSAGE_SPARE_S
  for (let i = 0; i < reach.count; i++) {
    earliestS[i] = s
    s += shortestS[i] + stopS[i + 1]
  }
  s = untilS + PASSAGE_SPARE_S
  for (let i = reach.count - 1; i >= 0; i--) {
    latestS[i] = s
    s -= shortestS[i] + stopS[i]
  }
  return { earliestS, latestS }
}

/** Steps of the clock at which the sun of a piece is worked out: around its passage, while it may be passed. */
function sunNodes(clock: Axis, steps: number, passedS: number, earliestS: number, latestS: number): number[] {
  const node = (s: number): number => Math.min(Math.max((s - clock.from) / clock.step, 0), clock.count - 1)
  const first = node(Math.max(passedS - WINDOW_S, Math.min(earliestS, passedS)))
  const last = node(Math.min(passedS + WINDOW_S, Math.max(latestS, passedS)))
  const nodes: number[] = []
  let k = Math.floor(first / steps) * steps
  for (; k < last; k += steps) nodes.push(k)
  nodes.push(Math.min(k, clock.count - 1))
  return nodes
}

function harvests(
  { race, dayIndex, path, base }: Along,
  reach: Reach,
  clock: Axis,
  by: { atS: Float64Array; packV: Float64Array; earliestS: Float64Array; latestS: Float64Array },
  clockSteps: number,
): Float64Array {
  const { opensMs } = race.days[dayIndex]
  const { pieces } = race.course
  const nodes = Array.from({ length: reach.count }, (_, i) =>
    sunNodes(clock, clockSteps, by.atS[i], by.earliestS[i], by.latestS[i]),
  )
  const count = nodes.reduce((sum, { length }) => sum + length, 0)
  const steps = emptySteps(count)
  steps.count = count
  const volts = new Float64Array(count)
  let n = 0
  nodes.forEach((of, i) => {
    const piece = reach.first + i
    for (const k of of) {
      steps.atMs[n] = opensMs + (clock.from + k * clock.step) * 1000
      steps.piece[n] = piece
      steps.latRad[n] = pieces.latRad[piece]
      steps.lonRad[n] = pieces.lonRad[piece]
      steps.altM[n] = pieces.altM[piece]
      steps.headingRad[n] = pieces.headingRad[piece]
      steps.gradeRad[n] = pieces.gradeRad[piece]
      steps.speedMps[n] = Math.max(base.road.heldMps[piece], SLOWEST_MPS)
      volts[n++] = by.packV[i]
    }
  })
  const sunW = sunOnBusW(race, path, steps, volts)
  const harvestW = new Float64Array(reach.count * clock.count)
  n = 0
  nodes.forEach((of, i) => {
    const row = harvestW.subarray(i * clock.count, (i + 1) * clock.count)
    fillBetween(row, of, sunW.subarray(n, n + of.length))
    n += of.length
  })
  return harvestW
}

/** Fills a row from values at some of its entries: straight between them, held beyond. */
function fillBetween(row: Float64Array, nodes: number[], values: Float64Array): void {
  row.fill(values[0], 0, nodes[0] + 1)
  for (let n = 1; n < nodes.length; n++) {
    const [from, to] = [nodes[n - 1], nodes[n]]
    for (let k = from + 1; k <= to; k++)
      row[k] = values[n - 1] + ((values[n] - values[n - 1]) * (k - from)) / (to - from)
  }
  row.fill(values[nodes.length - 1], nodes[nodes.length - 1] + 1)
}

/** Speed at which changes of speed are priced. [Mps] */
const USUAL_MPS = 80 / 3.6

/** What changes of speed cost at the bounds that the driver keeps to, on a level road in still air. */
export function kineticOf({ car }: Race): Kinetic {
  const massKg = car.load.massKg * car.load.rotatingFactor
  const going: Going = { gradeRad: 0, surfaceFactor: 1, headwindMps: 0, crosswindMps: 0, densityKgM3: 1.1 }
  const heldW = holdingN(car.load, USUAL_MPS, going) * USUAL_MPS
  const bus = { busW: 0, lossW: 0, brakedW: 0 }
  const busW = (wheelW: number): number => wheelToBus(car.drive, wheelW, USUAL_MPS, bus).busW
  const changeW = (mps2: number): number => massKg * mps2 * USUAL_MPS
  const { accelerationMps2, brakingMps2 } = car.bounds
  const perGained = (busW(heldW + changeW(accelerationMps2)) - busW(heldW)) / changeW(accelerationMps2)
  const perLost = (busW(heldW) - busW(heldW - changeW(brakingMps2))) / changeW(brakingMps2)
  return { massKg, perGained, perLost: Math.min(perLost, perGained) }
}

/** Fastest that the motor holds on each piece where no limit is posted. [Mps] (pieces of the day) */
export function motorMps({ race, base }: Along, reach: Reach): Float64Array {
  const { car } = race
  return Float64Array.from({ length: reach.count }, (_, i) =>
    Math.max(attainableSpeedMps(car.load, car.drive, goingOn(race, base, reach.first + i), topMps(race)), 1),
  )
}

const topMps = ({ car }: Race): number => Math.min(car.drive.topMps ?? FASTEST_MPS, FASTEST_MPS)

function goingOn({ course }: Race, { road }: Pick<DayForecast, 'road'>, piece: number): Going {
  return {
    gradeRad: course.pieces.gradeRad[piece],
    surfaceFactor: road.surfaceFactor[piece],
    headwindMps: road.headwindMps[piece],
    crosswindMps: road.crosswindMps[piece],
    densityKgM3: road.densityKgM3[piece],
  }
}

/** Power from the bus at each speed in the air that the base forecast met, and the fastest that is allowed and held. */
export function loads(
  { race, base }: { race: Race; base: Pick<DayForecast, 'road'> },
  reach: Reach,
  speeds: Axis,
): { loadW: Float64Array; fastestMps: Float64Array } {
  const { car } = race
  const loadW = new Float64Array(reach.count * speeds.count)
  const bus = { busW: 0, lossW: 0, brakedW: 0 }
  for (let i = 0; i < reach.count; i++) {
    const going = goingOn(race, base, reach.first + i)
    const slope = 1 / Math.cos(going.gradeRad)
    for (let j = 0; j < speeds.count; j++) {
      const speedMps = speeds.from + j * speeds.step
      wheelToBus(car.drive, holdingN(car.load, speedMps, going) * speedMps, speedMps, bus)
      loadW[i * speeds.count + j] = bus.busW * slope + car.auxDrivingW
    }
  }
  return { loadW, fastestMps: fastestOn({ race, base }, reach) }
}

/** Fastest that is allowed and that the motor holds. [Mps] (pieces of the day) */
function fastestOn({ race, base }: { race: Race; base: Pick<DayForecast, 'road'> }, reach: Reach): Float64Array {
  const { car, course } = race
  const top = topMps(race)
  return Float64Array.from({ length: reach.count }, (_, i) => {
    const wantedMps = Math.min(course.pieces.limitMps[reach.first + i], top)
    const going = goingOn(race, base, reach.first + i)
    return Math.max(attainableSpeedMps(car.load, car.drive, going, wantedMps), 1)
  })
}
