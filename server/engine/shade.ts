import { InputError } from './input-error.ts'
import { checkHeights, sunOverEdge } from './horizon.ts'
import { type AimAlong, liftedNormal, type PoseAlong, type SkyBlock } from './panel-light.ts'
import { panelNormal } from './plane.ts'
import { type Ring, ring, ringMean, ringPlace, ringValue } from './ring.ts'

/** What the car itself, its canopy above all, takes from one panel. */
export interface Shade {
  /** By bearing, clockwise from the nose: height over the deck's plane under which the beam is cut [rad], share lost. */
  edges: Ring
  /** Share of the even sky that is left. */
  evenShare: number
}

/** One row of a panel's table. */
export interface ShadeRow {
  /** Clockwise from the nose, in the deck's plane. [rad] */
  bearingRad: number
  /** Height of the sun over the deck's plane under which the beam is cut, 0..π/2. [rad] */
  heightRad: number
  /** Share of the panel's beam that is lost then, 0..1. */
  lostShare: number
}

/**
 * A panel's table of shade, linear between its rows and round the circle.
 *
 * The even sky loses what a panel in the deck's plane loses: the mean of lost share · sin² of the height.
 *
 * @param rows  ascending by bearing within one turn
 * @throws InputError when there is no row, rows do not ascend, or a value is out of range
 */
export function shade(field: string, rows: ShadeRow[]): Shade {
  checkHeights(field, rows)
  rows.forEach(({ lostShare }, i) => {
    if (!(lostShare >= 0 && lostShare <= 1))
      throw new InputError('out-of-range', `${field}[${i}].lostShare`, `is ${lostShare}, expected 0 to 1`)
  })
  const edges = ring(
    field,
    rows.map((row) => row.bearingRad),
    [rows.map((row) => row.heightRad), rows.map((row) => row.lostShare)],
  )
  return { edges, evenShare: 1 - ringMean(edges, ([h, lost]) => lost * Math.sin(h) ** 2) }
}

/**
 * Share of a panel's beam that its shade leaves, at steps from..to−1.
 *
 * Bearing and height of the sun are taken in the car's frame, which heading and grade turn, or in the lifted array's for
 * a panel that lifts: what shades it goes up with it. What is lost is spread evenly over the panel.
 *
 * @param out  overwritten from its start. (block)
 */
export function fillLit(
  panel: { lifts: boolean; shade: Shade },
  steps: { pose: PoseAlong; aim: AimAlong },
  range: { from: number; to: number; block: SkyBlock },
  out: Float64Array,
): void {
  const { headingRad, gradeRad, lifted } = steps.pose
  const { from, to, block } = range
  let frame = frameOf(0, 0)
  let lastHeading = Number.NaN
  let lastGrade = Number.NaN
  let wasUp = false
  for (let i = from, b = 0; i < to; i++, b++) {
    const isUp = panel.lifts && lifted[i] === 1
    if (isUp || wasUp || headingRad[i] !== lastHeading || gradeRad[i] !== lastGrade) {
      lastHeading = headingRad[i]
      lastGrade = gradeRad[i]
      wasUp = isUp
      frame = isUp
        ? liftedFrame(lastHeading, steps.aim.tiltRad[i], steps.aim.azimuthRad[i])
        : frameOf(lastHeading, lastGrade)
    }
    out[b] = litShare(panel.shade, frame, block.sunEast[b], block.sunNorth[b], block.sunUp[b])
  }
}

type Direction = [east: number, north: number, up: number]

/** The deck's own directions. */
export interface Frame {
  nose: Direction
  right: Direction
  up: Direction
}

const NOSE = { pitchRad: Math.PI / 2, rollRad: 0 }
const RIGHT = { pitchRad: 0, rollRad: Math.PI / 2 }
const DECK = { pitchRad: 0, rollRad: 0 }

/** The deck of a car on the road. */
export function frameOf(headingRad: number, gradeRad: number): Frame {
  const along = (part: typeof DECK): Direction => panelNormal(part.pitchRad, part.rollRad, headingRad, gradeRad)
  return { nose: along(NOSE), right: along(RIGHT), up: along(DECK) }
}

/** The deck of a lifted array. */
export function liftedFrame(headingRad: number, tiltRad: number, azimuthRad: number): Frame {
  const along = (part: typeof DECK): Direction => liftedNormal(part, headingRad, tiltRad, azimuthRad)
  return { nose: along(NOSE), right: along(RIGHT), up: along(DECK) }
}

/** Share of the beam that a shade leaves, by the apparent sun's direction, length 1. */
export function litShare({ edges }: Shade, frame: Frame, east: number, north: number, up: number): number {
  const on = (d: Direction): number => d[0] * east + d[1] * north + d[2] * up
  const place = ringPlace(edges, Math.atan2(on(frame.right), on(frame.nose)))
  const heightRad = ringValue(edges.columns[0], place)
  const lost = ringValue(edges.columns[1], place)
  if (!(lost > 0)) return 1
  const overRad = Math.asin(Math.min(1, Math.max(-1, on(frame.up)))) - heightRad
  return 1 - lost * (1 - sunOverEdge(overRad))
}
