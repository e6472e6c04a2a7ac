import { InputError } from './input-error.ts'
import { tableExtraW } from './loss-table.ts'
import type { Tracker } from './tracker.ts'

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
 * Power that a tracker gives to the pack: input less the four losses and what its bench lost beyond them, never below 0
 * nor above the input. Trackers that share a string each give that of their share.
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
  if (!(inputW > 0 && inputV > 0)) return 0
  if (tracker.channels !== undefined) return sharedOutputW(tracker.channels, inputW, inputV, packV)
  const { standingW, switchingFraction, conductionOhm, rectifierV } = tracker.losses
  const inputA = inputW / inputV
  const pastSwitchW = inputW - standingW - inputA * (switchingFraction * packV + conductionOhm * inputA)
  const outputW = pastSwitchW / (1 + rectifierV / packV)
  if (tracker.table === undefined) return Math.max(outputW, 0)
  return Math.min(Math.max(outputW - tableExtraW(tracker.table, inputW, inputV, packV), 0), inputW)
}

function sharedOutputW(
  { list, share }: NonNullable<Tracker['channels']>,
  inputW: number,
  inputV: number,
  packV: number,
): number {
  let sumW = 0
  for (let c = 0; c < list.length; c++)
    if (list[c].isDead !== true) sumW += trackerOutputW(list[c], inputW * share, inputV, packV)
  return sumW
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
  if (tracker.channels !== undefined || tracker.table !== undefined)
    return searchedInputW(tracker, outputW, inputV, packV)
  const { standingW, switchingFraction, conductionOhm, rectifierV } = tracker.losses
  const neededW = standingW + outputW * (1 + rectifierV / packV)
  const netV = inputV - switchingFraction * packV
  const square = netV * netV - 4 * conductionOhm * neededW
  if (!(netV > 0 && square >= 0)) return Infinity
  return (inputV * 2 * neededW) / (netV + Math.sqrt(square))
}

/** Widenings of the bracket, each by a quarter of the output; halvings that bring it below rounding. */
const MOST_WIDENINGS = 40
const HALVINGS = 60

function searchedInputW(tracker: Tracker, outputW: number, inputV: number, packV: number): number {
  let low = outputW
  let high = outputW
  for (let n = 0; trackerOutputW(tracker, high, inputV, packV) < outputW; n++) {
    if (n === MOST_WIDENINGS) return Infinity
    low = high
    high += outputW / 4
  }
  for (let n = 0; n < HALVINGS && high - low > 1e-12 * high; n++) {
    const middle = (low + high) / 2
    if (trackerOutputW(tracker, middle, inputV, packV) < outputW) low = middle
    else high = middle
  }
  return high
}
