import { InputError } from './input-error.ts'

/** The voltages, currents and power in which a tracker works. */
export interface TrackerWindow {
  inputMinV: number
  inputMaxV: number
  inputMaxA: number
  outputMinV: number
  outputMaxV: number
  outputMaxA: number
  /** Most power at the input. */
  maxW: number
}

/** Four physical losses, none negative. */
export interface TrackerLosses {
  /** Gate drive, core and controller. */
  standingW: number
  /** Times input current times output voltage: switching. */
  switchingFraction: number
  /** Times input current squared: coil and switch. */
  conductionOhm: number
  /** Times output current: rectifier. */
  rectifierV: number
}

/** A boost converter that holds a string at its best power. */
export interface Tracker {
  name: string
  window: TrackerWindow
  losses: TrackerLosses
  /** Share of the string's best power that the search for it reaches, above 0 up to 1. */
  trackingEfficiency: number
}

/** What keeps a tracker from the string's best power. */
export type TrackerLimit =
  | 'input-low'
  | 'input-high'
  | 'current'
  | 'power'
  | 'output-current'
  | 'cannot-step-down'
  | 'output-low'
  | 'output-high'
  | 'asleep'

/** Where a tracker holds its string. */
export interface OperatingPoint {
  inputW: number
  inputV: number
  /** What the window keeps the string from giving: best power as tracked, less inputW. */
  deniedW: number
  limit: TrackerLimit | null
}

/** A result to pass to operatingPoint again and again. */
export const newOperatingPoint = (): OperatingPoint => ({ inputW: 0, inputV: 0, deniedW: 0, limit: null })

/**
 * A tracker that the functions below can rely on.
 *
 * @throws InputError naming the field when a number is missing or out of range
 */
export function prepareTracker(tracker: Tracker): Tracker {
  const { window, losses, trackingEfficiency } = tracker
  const check = (name: string, value: number, isGood: boolean, wanted: string): void => {
    if (!isGood) throw new InputError('out-of-range', `tracker.${name}`, `${value} given, ${wanted} expected`)
  }
  for (const name of ['inputMinV', 'outputMinV'] as const) {
    check(`window.${name}`, window[name], window[name] >= 0 && window[name] < Infinity, 'a number of at least 0')
  }
  for (const name of ['inputMaxA', 'outputMaxA', 'maxW'] as const) {
    check(`window.${name}`, window[name], window[name] > 0, 'a number above 0')
  }
  check('window.inputMaxV', window.inputMaxV, window.inputMaxV > window.inputMinV, 'more than inputMinV')
  check('window.outputMaxV', window.outputMaxV, window.outputMaxV > window.outputMinV, 'more than outputMinV')
  for (const name of ['standingW', 'switchingFraction', 'conductionOhm', 'rectifierV'] as const) {
    check(`losses.${name}`, losses[name], losses[name] >= 0 && losses[name] < Infinity, 'a number of at least 0')
  }
  const isShare = trackingEfficiency > 0 && trackingEfficiency <= 1
  check('trackingEfficiency', trackingEfficiency, isShare, 'above 0 up to 1')
  return { ...tracker, window: { ...window }, losses: { ...losses } }
}

/**
 * Voltage that an ideal boost converter gives for each volt at its input.
 *
 * @param duty share of the time in which the switch conducts, 0 up to below 1
 * @returns 1/(1 − duty)
 * @source Erickson & Maksimović, Fundamentals of Power Electronics, 2nd ed. 2001, §2.3 (from memory)
 */
export function boostRatio(duty: number): number {
  if (!(duty >= 0 && duty < 1)) throw new InputError('out-of-range', 'duty', `${duty} given, 0 up to below 1 expected`)
  return 1 / (1 - duty)
}

/**
 * Power that a tracker gives to the pack: input less the four losses, 0 where they eat it all.
 *
 * Losses in physical variables: standing + switching·Iin·Vout + conduction·Iin² + rectifier·Iout.
 * For 0 < inputV ≤ packV and inside the window; continuous conduction.
 *
 * @param inputW power taken from the string, at least 0. [W]
 * @param inputV voltage at which it is taken. [V]
 * @param packV  voltage at the pack's terminals. [V]
 * @returns 0..inputW [W]
 * @source loss terms after Erickson & Maksimović 2001, ch. 3 and 4 (from memory); solved for Iout
 */
export function trackerOutputW(tracker: Tracker, inputW: number, inputV: number, packV: number): number {
  const { standingW, switchingFraction, conductionOhm, rectifierV } = tracker.losses
  if (!(inputW > 0 && inputV > 0)) return 0
  const inputA = inputW / inputV
  const pastSwitchW = inputW - standingW - inputA * (switchingFraction * packV + conductionOhm * inputA)
  return Math.max(pastSwitchW / (1 + rectifierV / packV), 0)
}

/**
 * Power to the pack and power lost, together the input; see trackerOutputW.
 *
 * @param out is filled and returned
 */
export function trackerOutput(
  tracker: Tracker,
  inputW: number,
  inputV: number,
  packV: number,
  out: { outputW: number; lossW: number } = { outputW: 0, lossW: 0 },
): { outputW: number; lossW: number } {
  out.outputW = trackerOutputW(tracker, inputW, inputV, packV)
  out.lossW = inputW - out.outputW
  return out
}

/**
 * Power that must come in for a power to go out; the inverse of trackerOutputW below its peak.
 *
 * @param outputW power into the pack, above 0. [W]
 * @returns Infinity where no input gives that much [W]
 */
export function inputForOutputW(tracker: Tracker, outputW: number, inputV: number, packV: number): number {
  const { standingW, switchingFraction, conductionOhm, rectifierV } = tracker.losses
  const neededW = standingW + outputW * (1 + rectifierV / packV)
  const netV = inputV - switchingFraction * packV
  const square = netV * netV - 4 * conductionOhm * neededW
  if (!(netV > 0 && square >= 0)) return Infinity
  return (inputV * 2 * neededW) / (netV + Math.sqrt(square))
}

function settle(out: OperatingPoint, inputW: number, inputV: number, wantedW: number, limit: TrackerLimit | null) {
  out.inputW = inputW
  out.inputV = inputV
  out.deniedW = Math.max(wantedW - inputW, 0)
  out.limit = limit
  return out
}

/** Which ceiling a power and voltage at the input break, if any. */
function ceilingBroken(tracker: Tracker, inputW: number, inputV: number, packV: number): TrackerLimit | null {
  const { inputMaxA, maxW, outputMaxA } = tracker.window
  if (inputW > inputMaxA * inputV) return 'current'
  if (inputW > maxW) return 'power'
  return trackerOutputW(tracker, inputW, inputV, packV) > outputMaxA * packV ? 'output-current' : null
}

/**
 * Holds the string beside its best point, at the voltage nearest to `heldV` where no ceiling is broken:
 * upwards if there is one, else downwards. Steps first, since a string of several panels has humps.
 */
function belowCeiling(
  tracker: Tracker,
  held: { V: number; lowV: number; highV: number; packV: number; limit: TrackerLimit; wantedW: number },
  trackedAtV: (volts: number) => number,
  out: OperatingPoint,
): OperatingPoint {
  const isSound = (volts: number): boolean => ceilingBroken(tracker, trackedAtV(volts), volts, held.packV) === null
  for (const endV of [held.highV, held.lowV]) {
    let broken = held.V
    for (let k = 1; k <= 32; k++) {
      let sound = held.V + ((endV - held.V) * k) / 32
      if (!isSound(sound)) {
        broken = sound
        continue
      }
      for (let i = 0; i < 40; i++) {
        const middle = (broken + sound) / 2
        if (isSound(middle)) sound = middle
        else broken = middle
      }
      return settle(out, trackedAtV(sound), sound, held.wantedW, held.limit)
    }
  }
  return settle(out, 0, held.V, held.wantedW, held.limit)
}

/** Power of the string at a voltage as the tracker finds it, never above what it gets at the best point. */
const trackedW = (powerW: number, trackingEfficiency: number, wantedW: number): number =>
  Math.min(Math.max(powerW, 0) * trackingEfficiency, wantedW)

/**
 * Where a tracker holds a string: at its best power, or at the nearest voltage that the window allows.
 *
 * A boost converter cannot step down: a string whose best voltage is above the pack's is held at the
 * pack's. Above a ceiling of current or power the string is let up towards its open circuit, or down
 * where there is no room above; where neither helps, or the losses would eat all, nothing is taken.
 *
 * @param tracker  checked by prepareTracker
 * @param best     power and voltage of the string's best point. [W, V]
 * @param packV    voltage at the pack's terminals. [V]
 * @param powerAtV power of the string held at a voltage; asked only when a limit binds. [V] → [W]
 * @param out      is filled and returned
 * @source boost converters: Erickson & Maksimović 2001, §2.3 (from memory); holding at the window's edge is common practice
 */
export function operatingPoint(
  tracker: Tracker,
  best: { W: number; V: number },
  packV: number,
  powerAtV: (volts: number) => number,
  out: OperatingPoint = newOperatingPoint(),
): OperatingPoint {
  const { window, trackingEfficiency } = tracker
  const wantedW = Math.max(best.W, 0) * trackingEfficiency
  if (!(wantedW > 0)) return settle(out, 0, best.V, 0, 'asleep')
  if (packV < window.outputMinV) return settle(out, 0, best.V, wantedW, 'output-low')
  if (packV > window.outputMaxV) return settle(out, 0, best.V, wantedW, 'output-high')
  const lowV = window.inputMinV
  const highV = Math.min(window.inputMaxV, packV)
  if (lowV > highV) return settle(out, 0, best.V, wantedW, 'cannot-step-down')
  let limit: TrackerLimit | null = null
  if (best.V < lowV) limit = 'input-low'
  else if (best.V > highV) limit = packV < window.inputMaxV ? 'cannot-step-down' : 'input-high'
  const heldV = Math.min(Math.max(best.V, lowV), highV)
  const heldW = limit === null ? wantedW : trackedW(powerAtV(heldV), trackingEfficiency, wantedW)
  const broken = ceilingBroken(tracker, heldW, heldV, packV)
  if (broken !== null) {
    const trackedAtV = (volts: number): number => trackedW(powerAtV(volts), trackingEfficiency, wantedW)
    return belowCeiling(tracker, { V: heldV, lowV, highV, packV, limit: broken, wantedW }, trackedAtV, out)
  }
  if (trackerOutputW(tracker, heldW, heldV, packV) === 0) {
    return settle(out, 0, heldV, wantedW, limit ?? 'asleep')
  }
  return settle(out, heldW, heldV, wantedW, limit)
}
