import type { HeatLoss } from './cell-temperature.ts'
import { beamShareAt, martinRuizGround, martinRuizSky } from './incidence.ts'
import { hayDavies, panelNormal, perez, sinOf } from './plane.ts'
import type { Shade } from './shade.ts'

/** What the array needs of the weather, one value a step; `weatherAlong` gives it. */
export interface LightAlong {
  /** True direction towards the sun, length 1. */
  sun: { east: Float64Array; north: Float64Array; up: Float64Array }
  apparentZenithRad: Float64Array
  extraWm2: Float64Array
  /** Relative. */
  airMass: Float64Array
  ghiWm2: Float64Array
  dniWm2: Float64Array
  dhiWm2: Float64Array
  airC: Float64Array
}

/** Where the car stands and what air it meets, one value a step. */
export interface PoseAlong {
  headingRad: Float64Array
  gradeRad: Float64Array
  /** Speed of the air over the panels. [m/s] */
  airSpeedMps: Float64Array
  /** 1 where the array is lifted. */
  lifted: Uint8Array
}

/** A run of steps that is worked at once, small enough to stay near: apparent sun, beam, sky shares, light on the ground. */
export interface SkyBlock {
  sunEast: Float64Array
  sunNorth: Float64Array
  sunUp: Float64Array
  /** On a surface square to the sun. */
  beamWm2: Float64Array
  aroundSunWm2: Float64Array
  domeWm2: Float64Array
  horizonWm2: Float64Array
  /** Global light on the level ground. */
  groundWm2: Float64Array
}

export const BLOCK_STEPS = 1024

/** Room for the sky of one block. */
export const skyBlock = (steps = BLOCK_STEPS): SkyBlock => ({
  sunEast: new Float64Array(steps),
  sunNorth: new Float64Array(steps),
  sunUp: new Float64Array(steps),
  beamWm2: new Float64Array(steps),
  aroundSunWm2: new Float64Array(steps),
  domeWm2: new Float64Array(steps),
  horizonWm2: new Float64Array(steps),
  groundWm2: new Float64Array(steps),
})

/** Fills a block with the apparent sun (true azimuth, apparent zenith), beam, sky and ground at steps from..to−1. */
export function fillSky(
  model: 'hay-davies' | 'perez',
  light: LightAlong,
  from: number,
  to: number,
  block: SkyBlock,
): void {
  const split = model === 'perez' ? perez : hayDavies
  const shares = { aroundSunWm2: 0, domeWm2: 0, horizonWm2: 0 }
  const sky = { dniWm2: 0, dhiWm2: 0, extraWm2: 0, cosZenith: 0, apparentZenithRad: 0, airMass: 0 }
  for (let i = from, b = 0; i < to; i++, b++) {
    const east = light.sun.east[i]
    const north = light.sun.north[i]
    const level = Math.sqrt(east * east + north * north)
    const cosZenith = Math.cos(light.apparentZenithRad[i])
    const stretch = level > 0 ? sinOf(cosZenith) / level : 0
    block.sunEast[b] = east * stretch
    block.sunNorth[b] = north * stretch
    block.sunUp[b] = cosZenith
    block.beamWm2[b] = light.dniWm2[i]
    block.groundWm2[b] = light.ghiWm2[i]
    sky.dniWm2 = light.dniWm2[i]
    sky.dhiWm2 = light.dhiWm2[i]
    sky.extraWm2 = light.extraWm2[i]
    sky.cosZenith = cosZenith
    sky.apparentZenithRad = light.apparentZenithRad[i]
    sky.airMass = light.airMass[i]
    split(sky, shares)
    block.aroundSunWm2[b] = shares.aroundSunWm2
    block.domeWm2[b] = shares.domeWm2
    block.horizonWm2[b] = shares.horizonWm2
  }
}

/** A panel made ready for `panelLight`. */
export interface LitPanel {
  pitchRad: number
  rollRad: number
  lifts: boolean
  /** Share of the beam by cos θ; null where nothing is lost. */
  beamTable: Float64Array | null
  /** Martin and Ruiz on sky and ground, the beam's law on light from around the sun; else diffuse light loses nothing. */
  losesDiffuse: boolean
  /** What the car itself takes; null where nothing. */
  shade: Shade | null
  loss: HeatLoss
}

/** Where the lifted array faces, one value a step; NaN where it is not lifted. */
export interface AimAlong {
  tiltRad: Float64Array
  azimuthRad: Float64Array
}

/** Results of one panel, one value a step. */
export interface PanelLight {
  planeWm2: Float64Array
  effectiveWm2: Float64Array
}

/** A panel's normal on the lifted array: the level car's array tilted about a level axis towards the aim's azimuth. */
export function liftedNormal(
  panel: { pitchRad: number; rollRad: number },
  headingRad: number,
  tiltRad: number,
  azimuthRad: number,
): [east: number, north: number, up: number] {
  const [east, north, up] = panelNormal(panel.pitchRad, panel.rollRad, headingRad, 0)
  const sinA = Math.sin(azimuthRad)
  const cosA = Math.cos(azimuthRad)
  const towards = east * sinA + north * cosA
  const aside = east * cosA - north * sinA
  const tipped = towards * Math.cos(tiltRad) + up * Math.sin(tiltRad)
  return [
    tipped * sinA + aside * cosA,
    tipped * cosA - aside * sinA,
    up * Math.cos(tiltRad) - towards * Math.sin(tiltRad),
  ]
}

/**
 * Light on one panel and light that reaches its cells, at steps from..to−1.
 *
 * The normal is worked out only when heading, grade or pose change; the angle between sun and panel is a dot product.
 *
 * @param block   sky of the same steps
 * @param albedo  share of light that the ground throws back, 0..1
 * @param lit     share of the beam that the car's own shade leaves, from the block's start; null for all of it
 * @param out     overwritten at those steps
 */
export function panelLight(
  panel: LitPanel,
  steps: { pose: PoseAlong; aim: AimAlong },
  range: { from: number; to: number; block: SkyBlock; albedo: number; lit: Float64Array | null },
  out: PanelLight,
): void {
  const { headingRad, gradeRad, lifted } = steps.pose
  const { tiltRad, azimuthRad } = steps.aim
  const { from, to, block, albedo, lit } = range
  const { beamTable, losesDiffuse, lifts } = panel
  const evenShare = panel.shade?.evenShare ?? 1
  let normal: [number, number, number] = [0, 0, 1]
  let [east, north, up] = normal
  let [sinTilt, keptSky, keptGround] = [0, 1, 1]
  let lastHeading = Number.NaN
  let lastGrade = Number.NaN
  let lastTilt = Number.NaN
  let lastAzimuth = Number.NaN
  let wasUp = false
  for (let i = from, b = 0; i < to; i++, b++) {
    const isUp = lifts && lifted[i] === 1
    const isTurned = isUp && (tiltRad[i] !== lastTilt || azimuthRad[i] !== lastAzimuth)
    if (isTurned || isUp !== wasUp || headingRad[i] !== lastHeading || gradeRad[i] !== lastGrade) {
      lastHeading = headingRad[i]
      lastGrade = gradeRad[i]
      lastTilt = tiltRad[i]
      lastAzimuth = azimuthRad[i]
      wasUp = isUp
      normal = isUp
        ? liftedNormal(panel, lastHeading, lastTilt, lastAzimuth)
        : panelNormal(panel.pitchRad, panel.rollRad, lastHeading, lastGrade)
      east = normal[0]
      north = normal[1]
      up = normal[2]
      sinTilt = sinOf(up)
      if (losesDiffuse) {
        keptSky = martinRuizSky(up)
        keptGround = martinRuizGround(up)
      }
    }
    const cos = Math.min(1, Math.max(0, east * block.sunEast[b] + north * block.sunNorth[b] + up * block.sunUp[b]))
    const litCos = lit === null ? cos : cos * lit[b]
    const beam = block.beamWm2[b] * litCos
    const aroundSun = block.aroundSunWm2[b] * litCos
    let even = block.domeWm2[b] * 0.5 * (1 + up) + block.horizonWm2[b] * sinTilt
    if (even > 0) even *= evenShare
    const sky = Math.max(0, aroundSun + even)
    const ground = block.groundWm2[b] * albedo * 0.5 * (1 - up)
    const plane = beam + sky + ground
    let effective = plane
    if (beamTable !== null) {
      const kept = beamShareAt(beamTable, cos)
      effective = losesDiffuse
        ? beam * kept + Math.max(0, aroundSun * kept + even * keptSky) + ground * keptGround
        : beam * kept + sky + ground
    }
    out.planeWm2[i] = plane
    out.effectiveWm2[i] = effective
  }
}
