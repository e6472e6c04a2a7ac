import type { StringSolver } from './string-solver.ts'

/** Places in `StringSolver.point`: current, voltage, the current's slope over x, the voltage's two slopes over current. */
export const I = 0
export const V = 1
export const IX = 2
export const VI = 3
export const VII = 4

export const MOST_STEPS = 60
/** Share of a voltage from which the curve's two slopes lead to it. */
const CLOSE_ENOUGH = 1e-4
/** One Newton step finds a junction's voltage when it moves the shunt's current by no more of the diode's than this. */
const SMALL_SHARE = 0.03
/** At a best point some 5 % of the light current go through the diode: ln 20 thermal voltages below open circuit. */
const KNEE_SHARE = 0.05
const KNEE_DEPTH = 3
/** Best over open-circuit voltage, roughly that of silicon; only where the search starts depends on it. */
const BEST_SHARE = 0.85

/** Junction voltage at which part p lets a current through, from the current that junction and shunt share; ours. */
function settledV(s: StringSolver, p: number, sharedA: number): number {
  const a = s.thermalV[p]
  const G = s.shuntS[p]
  const I0 = s.saturationA[p]
  let y = sharedA > I0 ? a * Math.log(sharedA / I0) : 0
  for (let step = 0; step < MOST_STEPS; step++) {
    const diodeA = I0 * Math.exp(y / a)
    const move = (diodeA + G * y - sharedA) / (diodeA / a + G)
    y -= move
    if (Math.abs(move) <= 1e-9 * (a + Math.abs(y))) break
  }
  return y
}

/**
 * The curve of the first `parts` parts of the order at junction voltage x of one of them.
 *
 * The others' junction voltages follow from the current by one logarithm and one Newton step for the shunt, which draws
 * on the place before; near the answer that is exact.
 */
export function follow(s: StringSolver, parts: number, lead: number, x: number, lostV: number): void {
  const { part, cells, lightA, saturationA, thermalV, shuntS, junctionV, point } = s
  const Rs = s.cell.seriesOhm
  const a = thermalV[lead]
  const grown = saturationA[lead] * Math.exp(x / a)
  const amps = lightA[lead] + saturationA[lead] - grown - x * shuntS[lead]
  const leadSlope = -grown / a - shuntS[lead]
  const leadCells = cells[lead]
  let volts = leadCells * (x - amps * Rs) - lostV
  let slope = leadCells * (1 / leadSlope - Rs)
  let bend = (leadCells * grown) / (a * a * leadSlope * leadSlope * leadSlope)
  for (let k = 0; k < parts; k++) {
    const p = part[k]
    if (p === lead) continue
    const thermal = thermalV[p]
    const G = shuntS[p]
    const sharedA = lightA[p] + saturationA[p] - amps
    let y = junctionV[p]
    let diodeA = sharedA - G * y
    const move = (thermal * Math.log(diodeA / saturationA[p]) - y) / (1 + (thermal * G) / diodeA)
    y += move
    diodeA -= G * move
    if (!(Math.abs(move) * G <= SMALL_SHARE * diodeA)) {
      y = settledV(s, p, sharedA)
      diodeA = saturationA[p] * Math.exp(y / thermal)
    }
    junctionV[p] = y
    const steep = -diodeA / thermal - G
    volts += cells[p] * (y - amps * Rs)
    slope += cells[p] * (1 / steep - Rs)
    bend += (cells[p] * diodeA) / (thermal * thermal * steep * steep * steep)
  }
  point[I] = amps
  point[V] = volts
  point[IX] = leadSlope
  point[VI] = slope
  point[VII] = bend
}

/** The part with the least light, whose junction voltage marks the place on the curve. */
export function leadOf(s: StringSolver, parts: number): number {
  const { part, lightA } = s
  let lead = part[0]
  for (let k = 1; k < parts; k++) if (lightA[part[k]] < lightA[lead]) lead = part[k]
  return lead
}

/**
 * Where the junctions stand at the best point, roughly: the lead's is returned, the others' are left in the solver.
 *
 * There the slope of the curve is voltage over current; parts whose light is close to the lead's have a share in it.
 */
export function startX(s: StringSolver, parts: number, lead: number, mostV: number): number {
  const { part, cells, lightA, thermalV, openV, junctionV } = s
  const a = thermalV[lead]
  const kneeA = KNEE_SHARE * lightA[lead]
  let bending = 0
  for (let k = 0; k < parts; k++) {
    const p = part[k]
    const close = kneeA / (kneeA + lightA[p] - lightA[lead])
    bending += cells[p] * close
    junctionV[p] = openV[p] - KNEE_DEPTH * close * thermalV[p]
  }
  const x = openV[lead] - a * Math.log(1 + (BEST_SHARE * mostV) / (bending * a))
  return x > 0 ? x : 0.5 * openV[lead]
}

/**
 * Current of the first `parts` parts at a voltage; 0 where they do not reach it. [A]
 *
 * @param lostV  lost over substrings that are bypassed
 * @param mostV  hardly above what the parts give with open terminals, less what is lost
 */
export function currentAtV(s: StringSolver, parts: number, lostV: number, mostV: number, volts: number): number {
  const { point } = s
  const lead = leadOf(s, parts)
  let highX = s.openV[lead]
  let lowX = (Math.min(volts, 0) - mostV) / s.cells[lead]
  let x = startX(s, parts, lead, mostV)
  for (let step = 0; step < MOST_STEPS; step++) {
    follow(s, parts, lead, x, lostV)
    const lackV = volts - point[V]
    const moreA = lackV / point[VI]
    if (Math.abs(lackV) <= CLOSE_ENOUGH * Math.abs(volts))
      return Math.max(0, point[I] + moreA * (1 - (0.5 * lackV * point[VII]) / (point[VI] * point[VI])))
    if (lackV > 0) lowX = x
    else highX = x
    if (point[I] <= 0 && lackV > 0) return 0
    x += moreA / point[IX]
    if (!(x > lowX && x < highX)) x = 0.5 * (lowX + highX)
  }
  return Math.max(0, point[I])
}
