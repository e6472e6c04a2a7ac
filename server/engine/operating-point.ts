import { channelsOf, type Derating, type Tracker, type TrackerLimit } from './tracker.ts'
import { trackerOutputW } from './tracker-output.ts'

/** Where a tracker holds its string. */
export interface OperatingPoint {
  inputW: number
  inputV: number
  /** What the window keeps the string from giving: best power as tracked, less inputW. */
  deniedW: number
  limit: TrackerLimit | null
}

/** Best point of a string. */
export interface BestPoint {
  W: number
  V: number
  /**
   * For a string whose power may have several hills over voltage, with cells in unequal light and bypass diodes: the
   * voltage between two at which it gives most. [V, V] → [V]
   */
  bestBetweenV?: (lowV: number, highV: number) => number
}

/** What surrounds a tracker. */
export interface Surroundings {
  /** Voltage at the pack's terminals. [V] */
  packV: number
  airC: number
  /** Whether the road's airflow cools its case. */
  isMoving: boolean
}

/** A result to pass to operatingPoint again and again. */
export const newOperatingPoint = (): OperatingPoint => ({ inputW: 0, inputV: 0, deniedW: 0, limit: null })

function settle(out: OperatingPoint, inputW: number, inputV: number, wantedW: number, limit: TrackerLimit | null) {
  out.inputW = inputW
  out.inputV = inputV
  out.deniedW = Math.max(wantedW - inputW, 0)
  out.limit = limit
  return out
}

/**
 * Share of its most power that a tracker may take with its case at a temperature.
 *
 * @returns 1 up to `fullToC`, then evenly down to `leastShare` at `leastFromC` and above
 * @source the usual form of data sheets (from memory)
 */
export function deratedShare({ fullToC, leastFromC, leastShare }: Derating, caseC: number): number {
  const past = Math.min(Math.max((caseC - fullToC) / (leastFromC - fullToC), 0), 1)
  return 1 - past * (1 - leastShare)
}

/** Temperature of a tracker's case that loses so much: steady, air plus thermal resistance times loss. [°C] */
export const caseTemperatureC = (derating: Derating, lossW: number, airC: number, isMoving: boolean): number =>
  airC + lossW * (isMoving ? derating.movingCPerW : derating.parkedCPerW)

/** Which ceiling a power and voltage at the input break, if any. */
function ceilingBroken(tracker: Tracker, inputW: number, inputV: number, around: Surroundings): TrackerLimit | null {
  const { inputMaxA, maxW, outputMaxA } = tracker.window
  if (inputW > inputMaxA * inputV) return 'current'
  if (inputW > maxW) return 'power'
  const outputW = trackerOutputW(tracker, inputW, inputV, around.packV)
  if (outputW > outputMaxA * around.packV) return 'output-current'
  const { derating } = tracker
  if (derating === undefined) return null
  const caseC = caseTemperatureC(derating, inputW - outputW, around.airC, around.isMoving)
  return inputW > maxW * deratedShare(derating, caseC) ? 'derated' : null
}

/** The first ceiling that any of a string's trackers breaks with its share. */
function anyCeilingBroken(tracker: Tracker, inputW: number, inputV: number, around: Surroundings): TrackerLimit | null {
  if (tracker.channels === undefined) return ceilingBroken(tracker, inputW, inputV, around)
  for (const channel of channelsOf(tracker)) {
    if (channel.isDead === true) continue
    const broken = ceilingBroken(channel, inputW * tracker.channels.share, inputV, around)
    if (broken !== null) return broken
  }
  return null
}

/** A string to be held between two voltages, and what it gives there as tracked. */
interface Held {
  tracker: Tracker
  around: Surroundings
  V: number
  lowV: number
  highV: number
  wantedW: number
  trackedAtV: (volts: number) => number
}

/**
 * Holds the string beside its best point, at the voltage nearest to `V` where no ceiling is broken: upwards if there
 * is one, else downwards; the ceiling broken just beside it is its limit. Steps first, since a string of several
 * panels has hills.
 */
function belowCeiling(held: Held, first: TrackerLimit, out: OperatingPoint): OperatingPoint {
  const { tracker, around, trackedAtV, wantedW } = held
  const brokenAt = (volts: number): TrackerLimit | null => anyCeilingBroken(tracker, trackedAtV(volts), volts, around)
  for (const endV of [held.highV, held.lowV]) {
    let limit = first
    let broken = held.V
    for (let k = 1; k <= 32; k++) {
      let sound = held.V + ((endV - held.V) * k) / 32
      const still = brokenAt(sound)
      if (still !== null) {
        limit = still
        broken = sound
        continue
      }
      for (let i = 0; i < 40; i++) {
        const middle = (broken + sound) / 2
        const beside = brokenAt(middle)
        if (beside === null) sound = middle
        else [limit, broken] = [beside, middle]
      }
      return settle(out, trackedAtV(sound), sound, wantedW, limit)
    }
  }
  return settle(out, 0, held.V, wantedW, first)
}

/** Power of the string at a voltage as the tracker finds it, never above what it gets at the best point. */
const trackedW = (powerW: number, trackingEfficiency: number, wantedW: number): number =>
  Math.min(Math.max(powerW, 0) * trackingEfficiency, wantedW)

/**
 * Where a tracker holds a string: at its best power, or at the best voltage that the window allows.
 *
 * A boost converter cannot step down: a string whose best voltage is above the pack's, less the tracker's least rise,
 * is held there. A string of one hill is held at the window's nearest edge, one of several where it gives most inside.
 * Above a ceiling of current, power or heat the string is let up towards its open circuit, or down where there is no
 * room above; where neither helps, or the losses would eat all, nothing is taken. A pack outside the output's
 * voltages, and a dead tracker, drop the string.
 *
 * @param tracker  from prepareTracker or sharedTracker
 * @param best     power and voltage of the string's best point. [W, V]
 * @param powerAtV power of the string held at a voltage; asked only when a limit binds. [V] → [W]
 * @param out      is filled and returned
 * @source boost converters: Erickson & Maksimović 2001, §2.3 (from memory); holding at the window's edge is common practice
 */
export function operatingPoint(
  tracker: Tracker,
  best: BestPoint,
  around: Surroundings,
  powerAtV: (volts: number) => number,
  out: OperatingPoint = newOperatingPoint(),
): OperatingPoint {
  const { window, trackingEfficiency } = tracker
  const { packV } = around
  const wantedW = Math.max(best.W, 0) * trackingEfficiency
  if (!(wantedW > 0)) return settle(out, 0, best.V, 0, 'asleep')
  if (tracker.isDead === true) return settle(out, 0, best.V, wantedW, 'dead')
  if (packV < window.outputMinV) return settle(out, 0, best.V, wantedW, 'output-low')
  if (packV > window.outputMaxV) return settle(out, 0, best.V, wantedW, 'output-high')
  const lowV = window.inputMinV
  const belowPackV = packV - (window.leastRiseV ?? 0)
  const highV = Math.min(window.inputMaxV, belowPackV)
  if (lowV > highV) return settle(out, 0, best.V, wantedW, 'cannot-step-down')
  let limit: TrackerLimit | null = null
  if (best.V < lowV) limit = 'input-low'
  else if (best.V > highV) limit = belowPackV < window.inputMaxV ? 'cannot-step-down' : 'input-high'
  if (limit === null && anyCeilingBroken(tracker, wantedW, best.V, around) === null) {
    const isAsleep = trackerOutputW(tracker, wantedW, best.V, packV) === 0
    return settle(out, isAsleep ? 0 : wantedW, best.V, wantedW, isAsleep ? 'asleep' : null)
  }
  const trackedAtV = (volts: number): number => trackedW(powerAtV(volts), trackingEfficiency, wantedW)
  const V = Math.min(Math.max(best.V, lowV), highV)
  const held: Held = { tracker, around, V, lowV, highV, wantedW, trackedAtV }
  if (limit !== null && best.bestBetweenV !== undefined) held.V = best.bestBetweenV(lowV, highV)
  return offBest(held, limit, out)
}

/** Where a string is held that cannot be held at its best point. */
function offBest(held: Held, limit: TrackerLimit | null, out: OperatingPoint): OperatingPoint {
  const { tracker, around, wantedW } = held
  const heldW = limit === null ? wantedW : held.trackedAtV(held.V)
  const broken = anyCeilingBroken(tracker, heldW, held.V, around)
  if (broken !== null) return belowCeiling(held, broken, out)
  const isAsleep = trackerOutputW(tracker, heldW, held.V, around.packV) === 0
  return settle(out, isAsleep ? 0 : heldW, held.V, wantedW, isAsleep ? (limit ?? 'asleep') : limit)
}
