import type { ArrayHarvest, PreparedArray } from './array.ts'
import { chargeLimitW, newPackStep, openCircuitV, stepPack, storedJ } from './battery.ts'
import type { Pack, PackStep } from './battery.ts'
import type { Course } from './course.ts'
import type { Drive } from './drive.ts'
import type { Air } from './motion.ts'
import { newRoadEnergy, roadEnergy } from './road-energy.ts'
import type { RoadEnergy } from './road-energy.ts'
import type { RoadLoad } from './road.ts'
import type { Steps } from './steps.ts'
import { takers } from './takers.ts'
import type { Takers } from './takers.ts'
import type { Span } from './timetable.ts'
import type { Tracker, TrackerLimit } from './tracker.ts'

/** The car as the forecast needs it; `trackers[i]` holds string `i`. */
export interface Car {
  load: RoadLoad
  drive: Drive
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

/** What comes in, goes out, is missing and is denied, in the order of the ledger. */
export const QUANTITIES = [
  'income',
  'rolling',
  'drag',
  'climbing',
  'brakes',
  'auxiliaries',
  'trackers',
  'drive',
  'pack',
  'short',
  'window',
  'tracking',
  'full',
] as const
export type Quantity = (typeof QUANTITIES)[number]

/** Energy by quantity. [J] */
export type Energy = Record<Quantity, number>

export const noEnergy = (): Energy => Object.fromEntries(QUANTITIES.map((q) => [q, 0])) as Energy

/** Into how many shares of a tracker's power its energy is sorted. */
const POWER_SHARES = 12

/** What one tracker did on a day. */
export interface TrackerDay {
  inputJ: number
  lossJ: number
  deniedJ: number
  /** Input energy times its voltage, for their mean. [J·V] */
  inputJV: number
  /** Input energy by input power, in equal shares of the most that the window allows. */
  fellJ: Float64Array
  limits: Map<TrackerLimit | 'full', { durationS: number; deniedJ: number }>
}

/** The day's energy, step by step and summed by span. Arrays have one entry per step. */
export interface Balance {
  inW: Float64Array
  outW: Float64Array
  deniedW: Float64Array
  charge: Float64Array
  storedJ: Float64Array
  packV: Float64Array
  /** By span of the timetable. */
  spans: Energy[]
  trackers: TrackerDay[]
  /** First step in which the pack could not give what was asked; -1 where it always could. */
  firstShort: number
}

/**
 * The pack's charge through the steps of a day, with every joule booked.
 *
 * In each step the strings give what the trackers take at the pack's voltage; drive and auxiliaries
 * draw; the pack takes or gives the difference. A full pack makes the trackers take less; what
 * regeneration is left over goes to the brakes. Stored energy after less before equals income plus
 * short less the spendings, to rounding.
 *
 * @param day     steps with the air and the harvest along them
 * @param charge  charge when the day opens, 0..1
 */
export function balance(car: Car, day: BalanceDay, charge: number): Balance {
  const { steps, spans } = day
  const out = emptyBalance(car, steps.count, spans.length)
  const pack = newPackStep()
  const road = newRoadEnergy()
  const taken = takers(car, day.harvest)
  let packV = openCircuitV(car.pack, charge)
  let heldJ = storedJ(car.pack, charge)
  for (let i = 0; i < steps.count; i++) {
    const sums = out.spans[steps.span[i]]
    const durationS = (steps.toMs[i] - steps.fromMs[i]) / 1000
    const isDriving = spans[steps.span[i]].kind === 'drive'
    const auxW = isDriving ? car.auxDrivingW : steps.charging[i] === 1 ? car.auxChargingW : car.auxParkedW
    if (isDriving) roadEnergy(car, day, roadStep(steps, i, durationS), road)
    else resetRoad(road)
    if (steps.charging[i] === 1) taken.take(i, packV)
    else taken.rest()
    const packS = Math.max(durationS, road.changeS)
    const netJ = fitToPack(car, taken, road, { charge, packV, durationS, packS, loadW: road.busJ / durationS + auxW })
    stepPack(car.pack, charge, netJ / packS, packS, pack)
    if (pack.shortJ > 0 && out.firstShort < 0) out.firstShort = i
    book(sums, road, pack, auxW * durationS)
    out.deniedW[i] = taken.book(out.trackers, sums, durationS) / durationS
    out.inW[i] = taken.inputW()
    out.outW[i] = out.inW[i] + (pack.shortJ - storedJ(car.pack, pack.charge) + heldJ) / durationS
    charge = pack.charge
    packV = pack.terminalV
    heldJ = storedJ(car.pack, charge)
    out.charge[i] = charge
    out.storedJ[i] = heldJ
    out.packV[i] = packV
  }
  return out
}

/** A day laid out, with the weather's effects on it. */
export interface BalanceDay {
  course: Course
  spans: Span[]
  steps: Steps
  air: Air
  harvest: ArrayHarvest
}

/** Where a step stands in its drive: a drive starts from rest and ends at rest. */
function roadStep(steps: Steps, i: number, durationS: number) {
  const startsHere = i === 0 || steps.span[i - 1] !== steps.span[i]
  const endsInHalt = i + 1 === steps.count || steps.span[i + 1] !== steps.span[i]
  return { index: i, durationS, beforeMps: startsHere ? 0 : steps.speedMps[i - 1], endsInHalt }
}

function resetRoad(road: RoadEnergy): void {
  road.busJ = road.rollingJ = road.dragJ = road.climbingJ = road.brakedJ = road.lossJ = road.changeS = 0
}

/**
 * Energy that goes to the pack: outputs less load, and no more than the pack takes. A full pack makes
 * the trackers take less; regeneration that is left over then goes to the brakes. [J]
 */
function fitToPack(
  car: Car,
  taken: Takers,
  road: RoadEnergy,
  now: { charge: number; packV: number; durationS: number; packS: number; loadW: number },
): number {
  const { durationS, packS, loadW } = now
  const netW = taken.outputW() - loadW
  if (!(netW > 0)) return netW * durationS
  const mostW = (chargeLimitW(car.pack, now.charge, packS) * packS) / durationS
  if (netW <= mostW) return netW * durationS
  taken.reduceBy(netW - mostW, now.packV)
  const leftW = taken.outputW() - loadW - mostW
  if (leftW > 0) {
    road.brakedJ += leftW * durationS
    road.busJ += leftW * durationS
  }
  return Math.min(taken.outputW() - loadW, mostW) * durationS
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
    spans: Array.from({ length: spans }, noEnergy),
    trackers: car.trackers.map(() => ({
      inputJ: 0,
      lossJ: 0,
      deniedJ: 0,
      inputJV: 0,
      fellJ: new Float64Array(POWER_SHARES),
      limits: new Map(),
    })),
    firstShort: -1,
  }
}

function book(sums: Energy, road: RoadEnergy, pack: PackStep, auxJ: number): void {
  sums.rolling += road.rollingJ
  sums.drag += road.dragJ
  sums.climbing += road.climbingJ
  sums.brakes += road.brakedJ
  sums.drive += road.lossJ
  sums.auxiliaries += auxJ
  // Above the limit by rounding only: what the pack spilled of what was already fitted to it.
  sums.pack += pack.lossJ + pack.spilledJ
  sums.short += pack.shortJ
}
