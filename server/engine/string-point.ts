import { currentAtV, follow, I, IX, leadOf, MOST_STEPS, startX, V, VI, VII } from './string-curve.ts'
import type { StringSolver } from './string-solver.ts'

/** How far from the top, as R − 1 and as a move over the thermal voltage, the curve's slopes lead to it. */
const CLOSE_ENOUGH = 0.1

/** Voltages between which a best point is looked for. */
interface Span {
  lowV: number
  highV: number
}

const ANY_VOLTAGE: Span = { lowV: 0, highV: Infinity }

/**
 * Climbs the hill of the first places of the order and keeps its top in `best` if it is higher and within the span.
 *
 * With R = −I·dV/dI ÷ V, 1 at the top, Newton's method on ln R, which is almost straight in x; ln R by its first Padé
 * fraction. The last move, a small one, goes along the curve's two slopes.
 */
function climb(s: StringSolver, place: number, span: Span, best: Float64Array): void {
  const { point } = s
  const parts = s.partsUpTo[place]
  const lead = leadOf(s, parts)
  const a = s.thermalV[lead]
  const lostV = s.lostV[place]
  let highX = s.openV[lead]
  let lowX = -s.mostV[place] / s.cells[lead]
  let x = startX(s, parts, lead, s.mostV[place])
  for (let step = 0; step <= MOST_STEPS; step++) {
    follow(s, parts, lead, x, lostV)
    const R = (-point[I] * point[VI]) / point[V]
    if (point[I] <= 0 || (point[V] > 0 && R < 1)) highX = x
    else lowX = x
    const slope = point[IX] / point[I] + (point[VII] * point[IX]) / point[VI] - (point[VI] * point[IX]) / point[V]
    const move = (-2 * (R - 1)) / ((R + 1) * slope)
    const isClose = Math.abs(R - 1) <= CLOSE_ENOUGH && Math.abs(move) <= CLOSE_ENOUGH * a
    if (!isClose && step < MOST_STEPS) {
      x += R > 0 ? move : Number.NaN
      if (!(x > lowX && x < highX)) x = 0.5 * (lowX + highX)
      continue
    }
    keep(s, move * point[IX], span, best)
    return
  }
}

/** Goes on along the curve by so many amperes, and keeps that point if its power is higher and it is within the span. */
function keep({ point }: StringSolver, moreA: number, { lowV, highV }: Span, best: Float64Array): void {
  const amps = point[I] + moreA
  const volts = point[V] + moreA * (point[VI] + 0.5 * moreA * point[VII])
  if (!(amps > 0 && amps * volts > best[0] && volts >= lowV && volts <= highV)) return
  best[0] = amps * volts
  best[1] = volts
  best[2] = amps
}

/**
 * More than the hill of the first places of the order can have.
 *
 * No part gives more than its current times its open-circuit voltage, times the fill factor of a junction without
 * resistances. That is concave over voltage ÷ thermal voltage, so its tangent at 25 lies above it; ours, by hand.
 */
function mostW(s: StringSolver, place: number): number {
  const { part, cells, lightA, thermalV, openV } = s
  const mostA = s.pastA[place]
  const parts = s.partsUpTo[place]
  let sum = 0
  for (let k = 0; k < parts; k++) {
    const p = part[k]
    const fill = 0.838 + 0.0048 * (openV[p] / thermalV[p] - 25)
    sum += cells[p] * openV[p] * Math.min(mostA, lightA[p] * Math.min(1, fill))
  }
  return sum
}

/**
 * Best point of the loaded step: within 0.003 % of `stringBest`.
 *
 * The string's voltage at a current is the most that any set of substrings gives, the others bypassed. So the best point
 * is the best over the sets that can carry the current, each a smooth hill; hills that cannot be higher are not climbed.
 *
 * @param best  overwritten: W of all rows of cells, V over the whole series, A of all rows
 */
export function solveBest(s: StringSolver, best: Float64Array): void {
  best.fill(0)
  climbAll(s, ANY_VOLTAGE, best)
  best[0] *= s.rows
  best[2] *= s.rows
}

function climbAll(s: StringSolver, span: Span, best: Float64Array): void {
  for (let place = s.carrying - 1; place >= 0; place--)
    if (s.pastA[place] * s.mostV[place] > best[0] && mostW(s, place) > best[0]) climb(s, place, span, best)
}

/**
 * Power of the loaded step's string held at a voltage: within 0.003 % of `stringPowerAtV`.
 *
 * The string's current at a voltage is the most that any set of substrings gives, the others bypassed.
 *
 * @param volts  voltage over the string, ≥ 0. [V]
 * @returns power of all rows, 0 at and above the open-circuit voltage. [W]
 */
export function solveHeld(s: StringSolver, volts: number): number {
  let amps = 0
  if (!(volts > 0)) return 0
  for (let place = 0; place < s.carrying && s.pastA[place] > amps; place++)
    if (s.mostV[place] > volts)
      amps = Math.max(amps, currentAtV(s, s.partsUpTo[place], s.lostV[place], s.mostV[place], volts))
  return amps * volts * s.rows
}

/**
 * Voltage between two at which the loaded step's string gives most, and that power: a hill's top, or one of the two.
 *
 * Power has one hill over voltage with each set of substrings, so between its tops it is highest at an edge.
 *
 * @param span  0 ≤ lowV ≤ highV. [V]
 * @param best  overwritten: W of all rows of cells, V
 */
export function solveBestBetween(s: StringSolver, span: Span, best: Float64Array): void {
  const { lowV, highV } = span
  best.fill(0)
  best[0] = solveHeld(s, highV) / s.rows
  best[1] = highV
  const lowW = s.carrying > 0 && lowV * s.pastA[0] > best[0] ? solveHeld(s, lowV) / s.rows : 0
  if (lowW > best[0]) {
    best[0] = lowW
    best[1] = lowV
  }
  climbAll(s, span, best)
  best[0] *= s.rows
}
