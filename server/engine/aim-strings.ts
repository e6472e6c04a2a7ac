import { deSoto, maximumPower } from './cell.ts'
import type { LitPanel } from './panel-light.ts'
import type { Pose } from './stand.ts'
import type { StringModel } from './substrings.ts'

/** Panels with one orientation, one cover and no shade of their own: they see the same light. */
export type Face = Pick<LitPanel, 'pitchRad' | 'rollRad' | 'lifts' | 'beamTable' | 'losesDiffuse' | 'shade'>

/** Cells in series over several faces, as the search for a pose weighs them. */
export interface SpanningString {
  faces: number[]
  /** Power of a face's cells per light on them. [W per W/m²] */
  cellsW: number[]
  /** What their bypass diodes take when the string's current goes past them. [W per W/m²] */
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
 * best by less than 0.1 % of the power.
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
    if (parts.faces.length === 1) perFaceW[parts.faces[0]] += parts.cellsW[0]
    else spanning.push(parts)
  }
  return { faces, perFaceW, spanning, known: new Map() }
}

function partsOf(string: StringModel, faceOf: number[]): SpanningString {
  const best = maximumPower(deSoto(string.cell, REFERENCE_WM2, REFERENCE_C))
  const perWm2 = (string.cellsInParallel * (1 - string.soilingFraction)) / REFERENCE_WM2
  const parts: SpanningString = { faces: [], cellsW: [], pastW: [] }
  for (const { panel, cellsInSeries, bypassDiodes = 1 } of string.groups) {
    const face = faceOf[panel]
    const known = parts.faces.indexOf(face)
    const at = known < 0 ? parts.faces.push(face) - 1 : known
    parts.cellsW[at] = (parts.cellsW[at] ?? 0) + perWm2 * best.W * cellsInSeries
    const pastV = bypassDiodes === 0 ? Infinity : string.bypassV * bypassDiodes
    parts.pastW[at] = (parts.pastW[at] ?? 0) + perWm2 * best.A * pastV
  }
  return parts
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
  const { faces, cellsW, pastW } = string
  let best = 0
  for (let k = 0; k < faces.length; k++) {
    const weakest = lightWm2[at + faces[k] * stride]
    if (!(weakest > 0)) continue
    let cells = 0
    let held = 0
    let past = 0
    for (let j = 0; j < faces.length; j++) {
      const light = lightWm2[at + faces[j] * stride]
      if (light < weakest) {
        past += pastW[j]
        continue
      }
      const share2 = (weakest / light) ** 2
      const share8 = share2 * share2 * share2 * share2
      cells += cellsW[j]
      held += cellsW[j] * share8 * share8
    }
    const current = weakest * Math.sqrt(Math.sqrt(Math.sqrt(Math.sqrt(cells / held))))
    best = Math.max(best, current * (cells - past))
  }
  return best
}
