import { deSoto, maximumPower } from './cell.ts'
import type { LitPanel } from './panel-light.ts'
import type { Pose } from './stand.ts'
import { type StringModel, substringsOf } from './substrings.ts'

/** Panels with one orientation, one cover and no shade of their own: they see the same light. */
export type Face = Pick<LitPanel, 'pitchRad' | 'rollRad' | 'lifts' | 'beamTable' | 'losesDiffuse' | 'shade'>

/** Cells in series over several faces, as the search for a pose weighs them. */
export interface SpanningString {
  /** Face of each part: cells that give way together, in one light. */
  faces: number[]
  /** Share of the face's light that its weakest cells get: dust and faults. */
  shares: number[]
  /** Power of its cells per light on them. [W per W/m²] */
  cellsW: number[]
  /** What its bypass diodes take when the string's current goes past them; Infinity without. [W per W/m²] */
  pastW: number[]
}

/** What a pose is worth to the strings: watts by the light on each face. */
export interface AimStrings {
  faces: Face[]
  /** All strings whose cells lie on this one face. [W per W/m²] (faces) */
  perFaceW: Float64Array
  spanning: SpanningString[]
  /** Poses found before, by the sky that they were found under: a day is forecast again and again. */
  known: Map<string, Pose>
}

const REFERENCE_WM2 = 1000
const REFERENCE_C = 25

const isAlike = (one: Face, other: Face): boolean =>
  one.pitchRad === other.pitchRad &&
  one.rollRad === other.rollRad &&
  one.lifts === other.lifts &&
  one.beamTable === other.beamTable &&
  one.losesDiffuse === other.losesDiffuse &&
  one.shade === other.shade

/**
 * Weighs the strings for `poseLight`: a cell's best power at 1000 W/m² and 25 °C stands for its power at any light.
 *
 * Cells get less efficient in weak light and in heat, all of them alike; the pose that is found so is short of the
 * best by 0.002 % of the power for panels within 20° of the deck, by 0.2 % at worst within 45°.
 */
export function aimStrings(panels: LitPanel[], strings: StringModel[]): AimStrings {
  const faces: Face[] = []
  const faceOf = panels.map((panel) => {
    const known = faces.findIndex((face) => isAlike(face, panel))
    return known < 0 ? faces.push(panel) - 1 : known
  })
  const perFaceW = new Float64Array(faces.length)
  const spanning: SpanningString[] = []
  for (const string of strings) {
    const parts = partsOf(string, faceOf)
    const [face] = parts.faces
    if (parts.faces.some((other) => other !== face)) spanning.push(parts)
    else if (face !== undefined) perFaceW[face] += spanningW(parts, new Float64Array(faces.length).fill(1), 0, 1)
  }
  return { faces, perFaceW, spanning, known: new Map() }
}

function partsOf(string: StringModel, faceOf: number[]): SpanningString {
  const best = maximumPower(deSoto(string.cell, REFERENCE_WM2, REFERENCE_C))
  const rows = string.cellsInParallel / REFERENCE_WM2
  const all: SpanningString = { faces: [], shares: [], cellsW: [], pastW: [] }
  for (const { panel, parts, dropV } of substringsOf(string)) {
    const face = faceOf[panel]
    const share = Math.min(...parts.map(({ lightShare }) => lightShare))
    const cells = parts.reduce((sum, part) => sum + part.cells, 0)
    const known = all.faces.findIndex((other, i) => other === face && all.shares[i] === share)
    const at = known < 0 ? all.faces.push(face) - 1 : known
    all.shares[at] = share
    all.cellsW[at] = (all.cellsW[at] ?? 0) + rows * best.W * cells
    all.pastW[at] = (all.pastW[at] ?? 0) + rows * best.A * dropV
  }
  return all
}

/**
 * Power of cells in series in unequal light: nearly that of the weakest, and best over every set of brightest faces.
 *
 * Cells that differ little lose (C + 2)/2 times the variance of their currents; a mean with the exponent −16 does the
 * same for C = 15, cells of a fill factor of 0.79, and comes near the weakest where they differ much.
 *
 * @param lightWm2  light of the faces, from `at` on. [W/m²]
 * @param stride    distance from one face's value to the next one's
 * @returns [W]
 * @source Bucciarelli 1979, Power loss in photovoltaic arrays due to mismatch in cell characteristics (from memory)
 */
export function spanningW(string: SpanningString, lightWm2: Float64Array, at: number, stride: number): number {
  const { faces, shares } = string
  let darkest = 0
  let least = Number.POSITIVE_INFINITY
  for (let k = 0; k < faces.length; k++) {
    const light = lightWm2[at + faces[k] * stride] * shares[k]
    if (!(light < least)) continue
    darkest = k
    least = light
  }
  let best = carriedW(string, lightWm2, { at, stride, weakest: darkest, floorW: 0 })
  for (let k = 0; k < faces.length; k++)
    if (k !== darkest) best = Math.max(best, carriedW(string, lightWm2, { at, stride, weakest: k, floorW: best }))
  return best
}

const root16 = (x: number): number => Math.sqrt(Math.sqrt(Math.sqrt(Math.sqrt(x))))

/** Power when the parts no darker than one carry the string; 0 where it cannot be above a floor. [W] */
function carriedW(
  { faces, shares, cellsW, pastW }: SpanningString,
  lightWm2: Float64Array,
  of: { at: number; stride: number; weakest: number; floorW: number },
): number {
  const { at, stride } = of
  const weakest = lightWm2[at + faces[of.weakest] * stride] * shares[of.weakest]
  let cells = 0
  let past = 0
  for (let j = 0; j < faces.length; j++)
    if (lightWm2[at + faces[j] * stride] * shares[j] < weakest) past += pastW[j]
    else cells += cellsW[j]
  // However bright the others are, the mean is above the weakest by no more than its own cells allow.
  if (!(weakest * root16(cells / cellsW[of.weakest]) * (cells - past) > of.floorW)) return 0
  let held = 0
  for (let j = 0; j < faces.length; j++) {
    const light = lightWm2[at + faces[j] * stride] * shares[j]
    if (light < weakest) continue
    const share = weakest / light
    const share2 = share * share
    const share8 = share2 * share2 * share2 * share2
    held += cellsW[j] * share8 * share8
  }
  return weakest * root16(cells / held) * (cells - past)
}
