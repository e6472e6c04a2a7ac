import type { ArrayHarvest, PreparedArray } from './array.ts'
import type { Pack, PackLimit, PackStep } from './battery.ts'
import type { Course } from './course.ts'
import type { Drive } from './drive.ts'
import type { MotionBounds } from './driven-road.ts'
import { noEnergy } from './energy.ts'
import type { Energy } from './energy.ts'
import type { Air } from './motion.ts'
import { packDay } from './pack-day.ts'
import type { PackDay, PackLimitSum } from './pack-day.ts'
import { newRoadEnergy, roadEnergy } from './road-energy.ts'
import type { RoadEnergy } from './road-energy.ts'
import type { RoadLoad } from './road.ts'
import type { Weather } from './sky.ts'
import type { Steps } from './steps.ts'
import { emptyDays, takers } from './takers.ts'
import type { Takers } from './takers.ts'
import type { Span } from './timetable.ts'
import type { Tracker, TrackerLimit } from './tracker.ts'

/** The car as the forecast needs it; `trackers[i]` holds string `i`, alone or as several channels. */
export interface Car {
  load: RoadLoad
  drive: Drive
  /** Bounds that the driver keeps to when the speed changes. */
  bounds: MotionBounds
  windHeightM: number
  auxDrivingW: number
  auxParkedW: number
  /** Parked with trackers at work. */
  auxChargingW: number
  array: PreparedArray
  trackers: Tracker[]
  pack: Pack
  reserveCharge: number
}

/** What one tracker did, step by step. */
export interface TrackerSteps {
  inputW: Float64Array
  outputW: Float64Array
  /** Where it held its string; 0 at rest. */
  inputV: Float64Array
  /** Terminals of the pack at its output. */
  packV: Float64Array
  /** Its part of the string's best point. */
  bestW: Float64Array
  /** Of that, what its window refused and what a full pack did. */
  deniedW: Float64Array
  fullW: Float64Array
  /** What bound: a place in LIMITS, from 1; 0 for nothing. */
  limit: Uint8Array
}

/** What one tracker did on a day. */
export interface TrackerDay {
  inputJ: number
  /** Of what it took. */
  lossJ: number
  /** Drawn from the pack while it took nothing. */
  standbyJ: number
  deniedJ: number
  /** Input energy times its voltage, for their mean. [J·V] */
  inputJV: number
  /** Input energy by input power, in equal shares of the most that the window allows. */
  fellJ: Float64Array
  limits: Map<TrackerLimit | 'full', { durationS: number; deniedJ: number }>
  steps: TrackerSteps
}

/** The day's energy, step by step and summed by span. Arrays have one entry per step. */
export interface Balance {
  /** Taken by the trackers. */
  inW: Float64Array
  /** Spent, all spendings together. */
  outW: Float64Array
  deniedW: Float64Array
  charge: Float64Array
  storedJ: Float64Array
  packV: Float64Array
  /** Temperature of the cells. [C] */
  packC: Float64Array
  /** By span of the timetable. */
  spans: Energy[]
  /** Trackers of the first string, then of the second and so on. */
  trackers: TrackerDay[]
  /** First step in which the pack could not give what was asked; -1 where it always could. */
  firstShort: number
  /** The limit that bound in that step. */
  firstShortLimit: PackLimit | null
  packLimits: PackLimitSum[]
}

/** What all trackers bring to the bus in a step. [W] */
export const broughtW = ({ trackers }: Pick<Balance, 'trackers'>, step: number): number =>
  trackers.reduce((sum, { steps }) => sum + steps.outputW[step], 0)

/**
 * The pack's charge through the steps of a day, with every joule booked.
 *
 * In each step the strings give what the trackers take at the pack's voltage; drive and auxiliaries
 * draw; the pack takes or gives the difference. A full or cold pack makes the trackers take less; what
 * regeneration is left over goes to the brakes. Stored energy after less before equals income plus
 * short less the spendings, to rounding.
 *
 * @param day     steps with the weather and the harvest along them
 * @param opening usable charge when the day opens, 0..1, and the pack's temperature [C]
 */
export function balance(car: Car, day: BalanceDay, opening: { charge: number; packC: number }): Balance {
  const { steps, spans } = day
  const { airC } = day.weather
  const out = emptyBalance(car, steps.count, spans.length)
  const pack = packDay(car.pack, opening.charge, opening.packC)
  const road = newRoadEnergy()
  const taken = takers(car, day)
  for (let i = 0; i < steps.count; i++) {
    const sums = out.spans[steps.span[i]]
    const durationS = (steps.toMs[i] - steps.fromMs[i]) / 1000
    const isDriving = spans[steps.span[i]].kind === 'drive'
    const auxW = isDriving ? car.auxDrivingW : steps.charging[i] === 1 ? car.auxChargingW : car.auxParkedW
    if (isDriving) roadEnergy(car, day, i, road)
    else resetRoad(road)
    const { packV, heldJ } = pack
    if (steps.charging[i] === 1) taken.take(i, packV)
    else taken.rest(i, packV)
    const netJ = (taken.outputW() - taken.standbyW()) * durationS - road.busJ - auxW * durationS
    pack.take(netJ, durationS, airC[i])
    if (pack.step.spilledJ > 0) giveUp(taken, road, { excessW: pack.step.spilledJ / durationS, packV, durationS })
    pack.warm(durationS, airC[i], isDriving)
    book(sums, road, pack.step, auxW * durationS)
    out.deniedW[i] = taken.book(out.trackers, sums, durationS) / durationS
    out.inW[i] = taken.inputW()
    out.outW[i] = out.inW[i] + (pack.step.shortJ - pack.heldJ + heldJ) / durationS
    note(out, i, pack)
  }
  bookMotion(car, steps, out)
  out.packLimits = pack.limits()
  return out
}

/** Motion that the car brings along when the day begins on the road counts as height that is already climbed. */
function bookMotion({ load }: Car, { fromMps, speedMps, span, count }: Steps, out: Balance): void {
  let first = 0
  while (first < count && speedMps[first] === 0) first++
  if (first === count || fromMps[first] === 0) return
  out.spans[span[first]].climbing -= 0.5 * load.massKg * load.rotatingFactor * fromMps[first] ** 2
}

function note(out: Balance, i: number, { charge, heldJ, packV, tempC, step }: PackDay): void {
  out.charge[i] = charge
  out.storedJ[i] = heldJ
  out.packV[i] = packV
  out.packC[i] = tempC
  if (out.firstShort >= 0 || !(step.shortJ > 0)) return
  out.firstShort = i
  out.firstShortLimit = step.limit
}

/** A day laid out, with the weather's effects on it. */
export interface BalanceDay {
  course: Course
  spans: Span[]
  steps: Steps
  weather: Pick<Weather, 'airC'>
  air: Air
  harvest: ArrayHarvest
}

function resetRoad(road: RoadEnergy): void {
  road.busJ = road.rollingJ = road.dragJ = road.climbingJ = road.brakedJ = road.lossJ = 0
}

/** What the pack refuses: the trackers take less first; regeneration that is left over goes to the brakes. */
function giveUp(
  taken: Takers,
  road: RoadEnergy,
  { excessW, packV, durationS }: { excessW: number; packV: number; durationS: number },
): void {
  const beforeW = taken.outputW()
  taken.reduceBy(excessW, packV)
  const brakedJ = Math.max(excessW - beforeW + taken.outputW(), 0) * durationS
  road.brakedJ += brakedJ
  road.busJ += brakedJ
}

function emptyBalance(car: Car, count: number, spans: number): Balance {
  const column = () => new Float64Array(count)
  return {
    inW: column(),
    outW: column(),
    deniedW: column(),
    charge: column(),
    storedJ: column(),
    packV: column(),
    packC: column(),
    spans: Array.from({ length: spans }, noEnergy),
    trackers: emptyDays(car, count),
    firstShort: -1,
    firstShortLimit: null,
    packLimits: [],
  }
}

function book(sums: Energy, road: RoadEnergy, pack: PackStep, auxJ: number): void {
  sums.rolling += road.rollingJ
  sums.drag += road.dragJ
  sums.climbing += road.climbingJ
  sums.brakes += road.brakedJ
  sums.drive += road.lossJ
  sums.auxiliaries += auxJ
  sums.pack += pack.lossJ
  sums.short += pack.shortJ
}
