import type { DayRules, StopRule } from '../day-rules.ts'
import type { Race } from '../forecast.ts'
import type { Horizon } from '../horizon.ts'
import { emptySteps } from '../steps.ts'
import type { SunPath } from '../sun.ts'
import { type Axis, storedW, type TablePack } from './day-tables.ts'
import { sunOnBusW } from './sun-on-bus.ts'

/** Energy that a parked car has stored since the clock began, lying flat and lifted. [J] (clock) */
export interface ParkedSun {
  clock: Axis
  flatJ: Float64Array
  liftedJ: Float64Array
  /** The same with the trackers at rest. */
  restingJ: Float64Array
}

/** Where a car stands: the piece, and whether on its end. */
export interface StandingPlace {
  piece: number
  isAtEnd: boolean
  horizon?: Horizon
}

/**
 * What a parked car stores at a place, summed over the day.
 *
 * @param opensMs  the instant that is 0 on the clock
 * @param packV    voltage at the pack's terminals. [V]
 */
export function parkedSun(
  race: Race,
  path: SunPath,
  place: StandingPlace,
  day: { clock: Axis; opensMs: number; pack: TablePack; packV: number },
): ParkedSun {
  const { clock, opensMs, pack, packV } = day
  const { car } = race
  const steps = emptySteps(2 * clock.count)
  const { pieces } = race.course
  steps.count = 2 * clock.count
  const canLift = car.array.model.stand !== null
  for (let i = 0; i < steps.count; i++) {
    const k = i % clock.count
    steps.atMs[i] = opensMs + (clock.from + k * clock.step) * 1000
    steps.piece[i] = place.piece
    steps.latRad[i] = pieces.latRad[place.piece]
    steps.lonRad[i] = pieces.lonRad[place.piece]
    steps.altM[i] = place.isAtEnd ? pieces.endAltM[place.piece] : pieces.startAltM[place.piece]
    steps.headingRad[i] = pieces.headingRad[place.piece]
    steps.lifted[i] = canLift && i >= clock.count ? 1 : 0
  }
  const sunW = sunOnBusW(race, path, steps, new Float64Array(steps.count).fill(packV), place.horizon)
  const sum = (powerW: (k: number) => number): Float64Array => {
    const J = new Float64Array(clock.count)
    for (let k = 1; k < clock.count; k++)
      J[k] = J[k - 1] + (clock.step * (storedW(pack, powerW(k - 1)) + storedW(pack, powerW(k)))) / 2
    return J
  }
  const restingW = -car.auxParkedW
  return {
    clock,
    flatJ: sum((k) => sunW[k] - car.auxChargingW),
    liftedJ: sum((k) => sunW[clock.count + k] - car.auxChargingW),
    restingJ: sum(() => restingW),
  }
}

/** A running sum between two instants. [J] */
function between(sum: Float64Array, clock: Axis, fromS: number, toS: number): number {
  const at = (s: number): number => {
    const x = Math.min(Math.max((s - clock.from) / clock.step, 0), clock.count - 1)
    const i = Math.min(x | 0, clock.count - 2)
    return sum[i] + (sum[i + 1] - sum[i]) * (x - i)
  }
  return toS > fromS ? at(toS) - at(fromS) : 0
}

/** What a stand of the car stores: flat while it is raised and lowered, lifted in between. [J] */
function liftedJ(
  sun: ParkedSun,
  fromS: number,
  toS: number,
  by: { lifts: boolean; raiseS: number; lowerS: number },
): number {
  const upS = fromS + by.raiseS
  const downS = toS - by.lowerS
  if (!by.lifts || downS <= upS) return between(sun.flatJ, sun.clock, fromS, toS)
  return (
    between(sun.flatJ, sun.clock, fromS, upS) +
    between(sun.liftedJ, sun.clock, upS, downS) +
    between(sun.flatJ, sun.clock, downS, toS)
  )
}

/** What a stop stores, by its length from an arrival. [J] */
export const stopGainJ = (sun: ParkedSun, rule: StopRule, arrivalS: number, lengthS: number): number =>
  liftedJ(sun, arrivalS, arrivalS + lengthS, rule)

/** What the rest of the day stores after the last arrival: charging windows, and rest between them. [J] */
export function eveningGainJ(suns: ParkedSun[], day: DayRules, arrivalS: number): number {
  const at = (ms: number): number => (ms - day.opensMs) / 1000
  const [resting] = suns
  let nowS = arrivalS
  let J = 0
  day.charging.forEach((window, w) => {
    const fromS = Math.max(at(window.fromMs), nowS)
    const toS = at(window.toMs)
    if (toS <= fromS) return
    J += between(resting.restingJ, resting.clock, nowS, fromS)
    const raiseS = fromS === at(window.fromMs) ? (window.raiseS ?? day.raiseS) : day.raiseS
    J += liftedJ(suns[w], fromS, toS, { lifts: window.lifts, raiseS, lowerS: day.lowerS })
    nowS = toS
  })
  return J + between(resting.restingJ, resting.clock, nowS, at(day.closesMs))
}
