import { InputError } from './input-error.ts'

/**
 * Time that a car takes to coast from one speed down to another on a level road in still air.
 *
 * Closed form of m·∫dv/(F0 + F1·v + F2·v²), one expression for every sign of 4·F0·F2 − F1².
 *
 * @param massKg  equivalent mass, turning parts included, above 0. [kg]
 * @param F0      resistance at rest. [N]
 * @param F1      resistance for each m/s. [N·s/m]
 * @param F2      resistance for each (m/s)². [N·s²/m²]
 * @param fromMps speed at the start, above toMps. [m/s]
 * @param toMps   speed at the end, at least 0. [m/s]
 * @returns [s]
 * @throws InputError when the resistance is not above 0 all the way or a speed is out of range
 * @source road-load force F0 + F1·v + F2·v², 40 CFR 86.529-98 and 1066.310; integral from tables
 */
export function coastDownS(massKg: number, F0: number, F1: number, F2: number, fromMps: number, toMps: number): number {
  if (!(massKg > 0 && massKg < Infinity)) {
    throw new InputError('out-of-range', 'massKg', `${massKg} given, a number above 0 expected`)
  }
  if (!(toMps >= 0 && fromMps >= toMps && fromMps < Infinity)) {
    throw new InputError('out-of-range', 'fromMps', `${fromMps} to ${toMps} given, falling speeds from 0 up expected`)
  }
  const forceN = (v: number): number => F0 + (F1 + F2 * v) * v
  const turnMps = F2 > 0 ? Math.min(Math.max(-F1 / (2 * F2), toMps), fromMps) : toMps
  if (!(forceN(toMps) > 0 && forceN(fromMps) > 0 && forceN(turnMps) > 0)) {
    throw new InputError(
      'out-of-range',
      'F0',
      `${F0}, ${F1}, ${F2} given, a resistance above 0 at every speed expected`,
    )
  }
  const spanMps = fromMps - toMps
  const meanN = 2 * F0 + F1 * (fromMps + toMps) + 2 * F2 * fromMps * toMps
  const root = Math.sqrt(Math.abs(4 * F0 * F2 - F1 * F1))
  if (root * spanMps < 1e-7 * Math.abs(meanN)) return (2 * massKg * spanMps) / meanN
  if (4 * F0 * F2 > F1 * F1) return ((2 * massKg) / root) * Math.atan2(root * spanMps, meanN)
  return ((2 * massKg) / root) * Math.atanh((root * spanMps) / meanN)
}
