import { InputError } from './input-error.ts'
import type { SkyBlock } from './panel-light.ts'
import { type Ring, ring, ringMean, ringPlace, ringValue } from './ring.ts'

/** Half the sun's width as seen from the earth, 16′ (mean; common knowledge). [rad] */
const SUN_RADIUS_RAD = (16 / 60) * (Math.PI / 180)

/** Height of the band over the level horizon that is brighter than the dome (Perez et al. 1987, from memory). [rad] */
const BAND_RAD = (6.5 * Math.PI) / 180

/** What stands around a parked car: trees, hills, walls. */
export interface Horizon {
  /** One column: height by azimuth, clockwise from true north. [rad] */
  heights: Ring
  /** Share of the sky's diffuse light that a level surface still gets, 0..1. */
  skyView: number
  /** Share of the bright band over the level horizon that is left, 0..1. */
  bandView: number
}

/** Which horizon holds at each step: `of[at[i]]`, null for an open one. */
export interface HorizonsAlong {
  of: (Horizon | null)[]
  at: Int32Array
}

/**
 * A horizon with its view of the sky: the mean of cos² of its height around the circle, for a level surface under an
 * even sky.
 *
 * @param rows  ascending by azimuth within one turn, height 0..π/2; straight lines between, round the north. [rad]
 * @throws InputError when there is no row, rows do not ascend, or a height is out of range
 * @source worked by hand: the light from above the height h is ∫ cos z·sin z dz from 0 to π/2 − h, cos²h/2 a radian
 */
export function horizon(field: string, rows: { azimuthRad: number; heightRad: number }[]): Horizon {
  checkHeights(field, rows)
  const heights = ring(
    field,
    rows.map((row) => row.azimuthRad),
    [rows.map((row) => row.heightRad)],
  )
  return {
    heights,
    skyView: 1 - ringMean(heights, ([h]) => Math.sin(h) ** 2),
    bandView: 1 - ringMean(heights, ([h]) => Math.min(1, h / BAND_RAD)),
  }
}

/** @throws InputError that names the first height out of range */
export function checkHeights(field: string, rows: { heightRad: number }[]): void {
  rows.forEach(({ heightRad }, i) => {
    if (!(heightRad >= 0 && heightRad <= Math.PI / 2))
      throw new InputError('out-of-range', `${field}[${i}].heightRad`, `is ${heightRad} rad, expected 0 to π/2 rad`)
  })
}

/**
 * Share of the sun's disc that stands above an edge: it rises and sets over two minutes, not at once.
 *
 * @param overRad  height of the sun's centre over the edge. [rad]
 * @returns 0..1, one half where the centre is on the edge
 * @source segment of a circle cut by a straight line
 */
export function sunOverEdge(overRad: number): number {
  const x = overRad / SUN_RADIUS_RAD
  if (x >= 1) return 1
  if (x <= -1) return 0
  return 0.5 + (x * Math.sqrt(1 - x * x) + Math.asin(x)) / Math.PI
}

/**
 * Takes from a block of sky what a horizon hides at steps from..to−1: beam and light from around the sun as the apparent
 * sun goes under it, the dome by the view of the sky, the band over the level horizon by its part that is hidden; and the
 * same from what the ground gets, which the band does not reach.
 *
 * The view is that of a level surface and is used for tilted panels too. What is hidden counts as dark. A height of 0
 * hides nothing, so that a level horizon changes nothing at all.
 */
export function hideSky({ of, at }: HorizonsAlong, from: number, to: number, block: SkyBlock): void {
  for (let i = from, b = 0; i < to; i++, b++) {
    const horizon = of[at[i]]
    if (horizon !== null) hideStep(horizon, block, b)
  }
}

function hideStep({ heights, skyView, bandView }: Horizon, block: SkyBlock, b: number): void {
  const up = block.sunUp[b]
  const heightRad = ringValue(heights.columns[0], ringPlace(heights, Math.atan2(block.sunEast[b], block.sunNorth[b])))
  const seen = heightRad > 0 ? sunOverEdge(Math.asin(Math.min(1, Math.max(-1, up))) - heightRad) : 1
  const cutWm2 = (1 - seen) * (block.beamWm2[b] + block.aroundSunWm2[b]) * Math.max(0, up)
  const lostWm2 = cutWm2 + (1 - skyView) * Math.max(0, block.domeWm2[b])
  block.beamWm2[b] *= seen
  block.aroundSunWm2[b] *= seen
  // A share below zero only darkens; hiding it must not brighten a panel.
  if (block.domeWm2[b] > 0) block.domeWm2[b] *= skyView
  if (block.horizonWm2[b] > 0) block.horizonWm2[b] *= bandView
  block.groundWm2[b] = Math.max(0, block.groundWm2[b] - lostWm2)
}
