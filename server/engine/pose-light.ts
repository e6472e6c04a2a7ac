import type { AimStrings, Face } from './aim-strings.ts'
import { spanningW } from './aim-strings.ts'
import { INCIDENCE_STEPS, martinRuizGround, martinRuizSky } from './incidence.ts'
import type { SkyBlock } from './panel-light.ts'
import { panelNormal } from './plane.ts'
import { type Frame, frameOf, liftedFrame, litShare } from './shade.ts'

/** Steps with one heading in which one pose is held. */
export interface Hold {
  /** Sky of the hold's steps from 0 on, or of sums of them. */
  sky: SkyBlock
  count: number
  headingRad: number
  /** Share of light that the ground throws back, 0..1. */
  albedo: number
}

/** Steps of the tables over sin(tilt/2), in which the shares are smooth: linear, wrong by at most 2e-6 of the light. */
const TILT_STEPS = 1024
const DIFFUSE_SKY = diffuseTable(martinRuizSky)
const DIFFUSE_GROUND = diffuseTable(martinRuizGround)

function diffuseTable(share: (cosTilt: number) => number): Float64Array {
  const at = (i: number): number => 1 - 2 * (Math.min(i, TILT_STEPS - 1e-3) / TILT_STEPS) ** 2
  const table = Float64Array.from({ length: TILT_STEPS + 2 }, (_, i) => share(at(Math.max(i, 1e-3))))
  return table
}

/** A face's normal, and the deck that its shade stands on. */
interface Facing {
  east: number
  north: number
  up: number
  frame: Frame
}

/** What a pose is worth over a hold; made once per array, so that the search makes no garbage. */
export interface PoseLight {
  /** Takes up another hold. */
  hold(next: Hold): void
  /** Sum over the hold's steps of what the strings give, cells as in `aimStrings`. [W] */
  powerW(tiltRad: number, azimuthRad: number): number
}

/** The light of poses on the faces of an array, as `panelLight` has it, weighed by its strings. */
export function poseLight(strings: AimStrings): PoseLight {
  const { faces, perFaceW, spanning } = strings
  const level = faces.map((): [number, number, number] => [0, 0, 1])
  const counts = faces.map((_, f) => perFaceW[f] > 0 || spanning.some((string) => string.faces.includes(f)))
  let now: Hold | null = null
  let lightWm2 = new Float64Array(0)
  let stillW = 0
  const facing: Facing = { east: 0, north: 0, up: 0, frame: frameOf(0, 0) }
  const isShaded = faces.some(({ shade }) => shade !== null)

  const spanningSumW = (steps: number): number => {
    let sum = 0
    for (const string of spanning) for (let b = 0; b < steps; b++) sum += spanningW(string, lightWm2, b, steps)
    return sum
  }

  /** Turns the faces to a pose. @returns what strings on one face give. [W] */
  const light = (hold: Hold, tiltRad: number, azimuthRad: number): number => {
    const turns = turnsOf(tiltRad, azimuthRad)
    if (isShaded) facing.frame = liftedFrame(hold.headingRad, tiltRad, azimuthRad)
    let sum = stillW
    for (let f = 0; f < faces.length; f++) {
      if (!counts[f] || !faces[f].lifts) continue
      tip(level[f], turns, facing)
      sum += perFaceW[f] * faceLight(faces[f], hold, facing, lightWm2, f * hold.count)
    }
    return sum
  }

  return {
    hold(next) {
      now = next
      const steps = next.count
      if (lightWm2.length < faces.length * steps) lightWm2 = new Float64Array(faces.length * steps)
      stillW = 0
      const frame = frameOf(next.headingRad, 0)
      faces.forEach((face, f) => {
        level[f] = panelNormal(face.pitchRad, face.rollRad, next.headingRad, 0)
        const [east, north, up] = level[f]
        if (counts[f] && !face.lifts)
          stillW += perFaceW[f] * faceLight(face, next, { east, north, up, frame }, lightWm2, f * steps)
      })
    },
    powerW: (tiltRad, azimuthRad) => (now === null ? 0 : light(now, tiltRad, azimuthRad) + spanningSumW(now.count)),
  }
}

const turnsOf = (tiltRad: number, azimuthRad: number) => ({
  sinA: Math.sin(azimuthRad),
  cosA: Math.cos(azimuthRad),
  sinT: Math.sin(tiltRad),
  cosT: Math.cos(tiltRad),
})

/** Tilts a normal of the level array towards an azimuth, as `liftedNormal` does, without a new list. */
function tip(
  [east, north, up]: [number, number, number],
  { sinA, cosA, sinT, cosT }: ReturnType<typeof turnsOf>,
  out: Facing,
): void {
  const towards = east * sinA + north * cosA
  const aside = east * cosA - north * sinA
  const lain = towards * cosT + up * sinT
  out.east = lain * sinA + aside * cosA
  out.north = lain * cosA - aside * sinA
  out.up = up * cosT - towards * sinT
}

/** Light past the cover on one face, step by step into `out` from `at` on. @returns its sum. [W/m²] */
function faceLight(
  { beamTable, losesDiffuse, shade }: Face,
  hold: Hold,
  { east, north, up, frame }: Facing,
  out: Float64Array,
  at: number,
): number {
  const { sky, count, albedo } = hold
  const evenShare = shade?.evenShare ?? 1
  const { sunEast, sunNorth, sunUp, beamWm2, aroundSunWm2, domeWm2, horizonWm2, groundWm2 } = sky
  const half = Math.sqrt(0.5 * Math.max(0, 1 - up))
  const sinTilt = 2 * half * Math.sqrt(Math.max(0, 1 - half * half))
  const ground = albedo * half * half * (losesDiffuse ? tableAt(DIFFUSE_GROUND, half * TILT_STEPS) : 1)
  const keptSky = losesDiffuse ? tableAt(DIFFUSE_SKY, half * TILT_STEPS) : 1
  const dome = keptSky * (1 - half * half)
  const horizon = keptSky * sinTilt
  let sum = 0
  for (let b = 0; b < count; b++) {
    const cos = Math.min(1, Math.max(0, east * sunEast[b] + north * sunNorth[b] + up * sunUp[b]))
    const lit = shade === null ? cos : cos * litShare(shade, frame, sunEast[b], sunNorth[b], sunUp[b])
    const through = beamTable === null ? lit : lit * tableAt(beamTable, cos * INCIDENCE_STEPS)
    const even = dome * domeWm2[b] + horizon * horizonWm2[b]
    const diffuse = (losesDiffuse ? through : lit) * aroundSunWm2[b] + (even > 0 ? even * evenShare : even)
    const each = beamWm2[b] * through + Math.max(0, diffuse) + ground * groundWm2[b]
    out[at + b] = each
    sum += each
  }
  return sum
}

/** A table's value between two of its entries. */
function tableAt(table: Float64Array, at: number): number {
  const i = at | 0
  return table[i] + (table[i + 1] - table[i]) * (at - i)
}
