import type { PreparedArray } from './array.ts'
import { type HorizonsAlong, hideSky } from './horizon.ts'
import { type AimAlong, fillSky, type LightAlong, type SkyBlock, skyBlock } from './panel-light.ts'
import { type PoseLight, poseLight } from './pose-light.ts'
import { bestPose } from './pose-search.ts'
import { aimAtSun, type Pose, type Stand, turnedOff } from './stand.ts'

/** Steps in which the array may be lifted, and which of them share one pose. */
export interface LiftedSteps {
  weather: LightAlong
  headingRad: Float64Array
  lifted: Uint8Array
  /** Number of the hold that a lifted step belongs to; left out, every step has a pose of its own. */
  hold?: Int32Array
  /** What stands around the car; left out, nothing. */
  horizons?: HorizonsAlong
}

/**
 * Numbers the holds of a day: from when the array is up, every `reaimS` a new pose, and a new one in every span.
 *
 * @param steps   of equal kind in a row; a step belongs to the hold that its middle lies in
 * @param reaimS  0 gives every step a hold of its own. [s]
 * @returns −1 where the array is not lifted (steps)
 */
export function holdsAlong(
  steps: { count: number; fromMs: Float64Array; atMs: Float64Array; span: Int32Array; lifted: Uint8Array },
  reaimS: number,
): Int32Array {
  const hold = new Int32Array(steps.count).fill(-1)
  let next = 0
  let upMs = 0
  let turn = 0
  for (let i = 0; i < steps.count; i++) {
    if (steps.lifted[i] !== 1) continue
    const goesOn = i > 0 && steps.lifted[i - 1] === 1 && steps.span[i - 1] === steps.span[i]
    if (!goesOn) upMs = steps.fromMs[i]
    const now = reaimS > 0 ? Math.floor((steps.atMs[i] - upMs) / (reaimS * 1000)) : i
    if (!goesOn || now !== turn) next++
    turn = now
    hold[i] = next - 1
  }
  return hold
}

/** First step after the hold that begins at a step; a change of heading ends it too. */
function holdEnd({ headingRad, lifted, hold }: LiftedSteps, from: number): number {
  let to = from + 1
  if (hold === undefined) return to
  while (to < lifted.length && lifted[to] === 1 && hold[to] === hold[from] && headingRad[to] === headingRad[from]) to++
  return to
}

/** A hold with its sky. */
interface Held {
  steps: LiftedSteps
  sky: SkyBlock
  from: number
  to: number
}

/** Gives every hold of the lifted steps the pose that is found for it. */
function poseHolds(array: PreparedArray, steps: LiftedSteps, out: AimAlong, find: (held: Held) => Pose): void {
  let sky = skyBlock(64)
  for (let from = 0; from < steps.lifted.length; from++) {
    if (steps.lifted[from] !== 1) continue
    const to = holdEnd(steps, from)
    if (to - from > sky.sunUp.length) sky = skyBlock(2 * (to - from))
    fillSky(array.model.skyModel, steps.weather, from, to, sky)
    if (steps.horizons !== undefined) hideSky(steps.horizons, from, to, sky)
    const { tiltRad, azimuthRad } = find({ steps, sky, from, to })
    out.tiltRad.fill(tiltRad, from, to)
    out.azimuthRad.fill(azimuthRad, from, to)
    from = to - 1
  }
}

/** Steps whose light is searched as one: in ten minutes the sun moves by 2.5°. */
const AT_ONCE = 10

function takeUp(light: PoseLight, array: PreparedArray, { steps, sky, from, to }: Held): void {
  const count = condense(sky, to - from)
  light.hold({ sky, count, headingRad: steps.headingRad[from], albedo: array.model.albedo })
}

/**
 * Sums a block of sky by every few steps, in place: beam and light around the sun as vectors, the rest as it is.
 *
 * @returns how many sums there are
 */
function condense(sky: SkyBlock, steps: number): number {
  const parts = Math.ceil(steps / AT_ONCE)
  for (let part = 0; part < parts; part++)
    sumSky(sky, part, Math.floor((part * steps) / parts), Math.floor(((part + 1) * steps) / parts))
  return parts
}

function sumSky(sky: SkyBlock, to: number, from: number, end: number): void {
  if (end - from === 1 && from === to) return
  const { sunEast, sunNorth, sunUp, beamWm2, aroundSunWm2, domeWm2, horizonWm2, groundWm2 } = sky
  let [east, north, up, beam, around, dome, horizon, ground] = [0, 0, 0, 0, 0, 0, 0, 0]
  for (let b = from; b < end; b++) {
    // A trace of light that is not there keeps the direction where there is no beam.
    const weight = beamWm2[b] + aroundSunWm2[b] + 1e-9
    east += weight * sunEast[b]
    north += weight * sunNorth[b]
    up += weight * sunUp[b]
    beam += beamWm2[b]
    around += aroundSunWm2[b]
    dome += domeWm2[b]
    horizon += horizonWm2[b]
    ground += groundWm2[b]
  }
  const length = Math.hypot(east, north, up)
  const kept = Math.min(1, length / (beam + around + 1e-9 * (end - from)))
  sunEast[to] = east / length
  sunNorth[to] = north / length
  sunUp[to] = up / length
  beamWm2[to] = beam * kept
  aroundSunWm2[to] = around * kept
  domeWm2[to] = dome
  horizonWm2[to] = horizon
  groundWm2[to] = ground
}

/** What a pose depends on, besides heading and length of the hold. */
const SKY_PARTS = [
  'sunEast',
  'sunNorth',
  'sunUp',
  'beamWm2',
  'aroundSunWm2',
  'domeWm2',
  'horizonWm2',
  'groundWm2',
] as const satisfies (keyof SkyBlock)[]

/** Poses that an array keeps in mind at most. */
const MOST_KNOWN = 4000

/**
 * Poses of the lifted array, hold by hold: most light on the cells, or most of the sun's beam, as the stand's aim says.
 *
 * Most light counts beam, light around the sun, dome, horizon and ground on every panel that lifts, past what stands
 * around the car, the car's own shade and the cover, with panels keeping pitch and roll on the lifted array; within a
 * hold the steps' powers are summed. Steps of a hold count alike: they are of one length.
 *
 * @param out  overwritten at lifted steps
 */
export function aimAlong(array: PreparedArray, stand: Stand, steps: LiftedSteps, out: AimAlong): void {
  const light = stand.aim === 'most-light' ? poseLight(array.aim) : null
  poseHolds(array, steps, out, (held) => {
    const { sky, from, to } = held
    const sum = (parts: Float64Array): number => {
      let total = 0
      for (let b = 0; b < to - from; b++) total += parts[b]
      return total
    }
    const atSun = aimAtSun(stand, sum(sky.sunEast), sum(sky.sunNorth), sum(sky.sunUp))
    if (light === null) return atSun
    const { known } = array.aim
    const asked = `${steps.headingRad[from]} ${to - from} ${SKY_PARTS.map((part) => sum(sky[part])).join(' ')}`
    const before = known.get(asked)
    if (before !== undefined) return before
    takeUp(light, array, held)
    const pose = bestPose(stand, (tiltRad, azimuthRad) => light.powerW(tiltRad, azimuthRad), atSun)
    if (known.size >= MOST_KNOWN) known.clear()
    known.set(asked, pose)
    return pose
  })
}

/** Directions in which being off is tried; the worst of all is worse by no more than 2 %. */
const DIRECTIONS = 16

/**
 * Poses off given ones by up to an angle, in the direction in which that costs most light, hold by hold.
 *
 * The limits of the stand do not count: a car that stands askew goes past them.
 *
 * @param aim     poses to be off of
 * @param before  poses off by a smaller angle, where they are known: they stay where they are worse. (steps)
 * @param out     overwritten at lifted steps
 */
export function offAlong(
  array: PreparedArray,
  steps: LiftedSteps,
  of: { aim: AimAlong; offRad: number; before: AimAlong },
  out: AimAlong,
): void {
  const light = poseLight(array.aim)
  poseHolds(array, steps, out, (held) => {
    const poseAt = ({ tiltRad, azimuthRad }: AimAlong): Pose => ({
      tiltRad: tiltRad[held.from],
      azimuthRad: azimuthRad[held.from],
    })
    takeUp(light, array, held)
    let worst = poseAt(of.before)
    let leastW = light.powerW(worst.tiltRad, worst.azimuthRad)
    for (let d = 0; d < DIRECTIONS; d++) {
      const pose = turnedOff(poseAt(of.aim), of.offRad, (2 * Math.PI * d) / DIRECTIONS)
      const getsW = light.powerW(pose.tiltRad, pose.azimuthRad)
      if (getsW < leastW) [worst, leastW] = [pose, getsW]
    }
    return worst
  })
}
