import { currentAtVoltage, deSoto, maximumPower, type OperatingPoint, openCircuitV } from './cell.ts'
import { fallingRoot, heldAt, type LitSubstring, pointOf, runsOf, topOf } from './string-runs.ts'
import { type StringModel, substringsOf } from './substrings.ts'

const NOTHING: OperatingPoint = { W: 0, V: 0, A: 0 }
/**
 * The string's substrings in the light and temperature that each panel has.
 *
 * @param effectiveWm2  light past the cover per panel, before soiling. [W/m²]
 * @param cellC         cell temperature per panel. [°C]
 */
export function litSubstrings(
  string: StringModel,
  effectiveWm2: ArrayLike<number>,
  cellC: ArrayLike<number>,
): LitSubstring[] {
  return substringsOf(string).map(({ panel, parts, dropV }) => ({
    dropV,
    parts: parts.map(({ cells, lightShare }) => ({
      cells,
      diode: deSoto(string.cell, effectiveWm2[panel] * lightShare, cellC[panel]),
    })),
  }))
}

const isPlain = (substrings: LitSubstring[]): boolean => substrings.length === 1 && substrings[0].parts.length === 1

/**
 * Best point of cells in series in unequal light: the best over every set of substrings that can carry the current.
 *
 * A substring gives way to its bypass diodes when the current would push its voltage below their drop. Between such
 * currents power has one hill; the highest hill is the answer, and hills that cannot be higher are not climbed. Weak
 * cells in a substring are driven backwards by the others until it gives way. Exact; cells in one light are their own
 * best point.
 *
 * @returns point of one row of cells: W, V over the whole series, A. All dark gives exactly 0 W
 * @source Bishop 1988 for the cell's curve; bypass rule worked by hand
 */
export function bestOfSubstrings(substrings: LitSubstring[]): OperatingPoint {
  if (isPlain(substrings)) {
    const [{ diode, cells }] = substrings[0].parts
    const best = maximumPower(diode)
    return { W: best.W * cells, V: best.V * cells, A: best.A }
  }
  let best = NOTHING
  const runs = runsOf(substrings)
  for (let r = runs.length - 1; r >= 0; r--) {
    const run = runs[r]
    if (run.mostA * pointOf(run, run.highX).V <= best.W) continue
    const top = topOf(run)
    if (top.W > best.W) best = top
  }
  return best
}

/**
 * Voltage between two at which cells in series give most: the top of a hill, or one of the two.
 *
 * @param lowV   ≥ 0. [V]
 * @param highV  ≥ lowV. [V]
 */
export function bestOfSubstringsBetweenV(substrings: LitSubstring[], lowV: number, highV: number): number {
  const edges = [lowV, highV].map((V) => ({ W: powerOfSubstringsAtV(substrings, V), V }))
  const tops = runsOf(substrings).map(topOf)
  const inside = tops.filter(({ V }) => V >= lowV && V <= highV)
  return [...edges, ...inside].reduce((best, each) => (each.W > best.W ? each : best)).V
}

/**
 * Power of cells in series held at a voltage, 0 at and above their open-circuit voltage.
 *
 * @param volts  voltage over the whole series, ≥ 0. [V]
 * @returns power of one row of cells. [W]
 */
export function powerOfSubstringsAtV(substrings: LitSubstring[], volts: number): number {
  if (!(volts > 0)) return 0
  if (isPlain(substrings)) {
    const [{ diode, cells }] = substrings[0].parts
    return volts < cells * openCircuitV(diode) ? volts * currentAtVoltage(diode, volts / cells) : 0
  }
  const run = runsOf(substrings).find((each) => pointOf(each, each.highX).V > volts)
  return run === undefined ? 0 : volts * fallingRoot(run, heldAt(volts), run.highX).I
}

/** Best power and voltage of a string in its panels' light; all rows of its cells together. */
export function stringBest(
  string: StringModel,
  effectiveWm2: ArrayLike<number>,
  cellC: ArrayLike<number>,
): OperatingPoint {
  const { W, V, A } = bestOfSubstrings(litSubstrings(string, effectiveWm2, cellC))
  return { W: W * string.cellsInParallel, V, A: A * string.cellsInParallel }
}

/** Power of a string held at a voltage in its panels' light; all rows of its cells together. [W] */
export const stringPowerAtV = (
  string: StringModel,
  effectiveWm2: ArrayLike<number>,
  cellC: ArrayLike<number>,
  volts: number,
): number => powerOfSubstringsAtV(litSubstrings(string, effectiveWm2, cellC), volts) * string.cellsInParallel

/** Voltage between two at which a string in its panels' light gives most. [V] */
export const stringBestBetweenV = (
  string: StringModel,
  effectiveWm2: ArrayLike<number>,
  cellC: ArrayLike<number>,
  span: { lowV: number; highV: number },
): number => bestOfSubstringsBetweenV(litSubstrings(string, effectiveWm2, cellC), span.lowV, span.highV)
