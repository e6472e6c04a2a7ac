/** How a stand can hold the lifted array, and how its crew points it. */
export interface Stand {
  /** Tilt from level. [rad] */
  tiltMinRad: number
  tiltMaxRad: number
  /** Clockwise from true north; the arc runs clockwise from here … [rad] */
  azimuthFromRad: number
  /** … to here; 2π or more beyond it is the whole circle, equal is one azimuth only. [rad] */
  azimuthToRad: number
  /** At the pose with the most light on the cells, or at the pose with the most of the sun's beam. */
  aim: 'most-light' | 'at-sun'
  /** One pose is held so long, then the next; 0 follows all the time. [s] */
  reaimS: number
}

/** Where the lifted array faces: tilt from level, and azimuth clockwise from true north. */
export interface Pose {
  tiltRad: number
  azimuthRad: number
}

const CIRCLE_RAD = 2 * Math.PI

/** An angle in 0..2π. */
export const turn = (rad: number): number => ((rad % CIRCLE_RAD) + CIRCLE_RAD) % CIRCLE_RAD

/** Width of the arc that a stand can face; 2π for the whole circle, 0 for one azimuth. [rad] */
export function arcRad({ azimuthFromRad, azimuthToRad }: Stand): number {
  return azimuthToRad - azimuthFromRad >= CIRCLE_RAD - 1e-9 ? CIRCLE_RAD : turn(azimuthToRad - azimuthFromRad)
}

/** The arc's azimuth nearest to a wanted one, 0..2π. [rad] */
export function nearestAzimuthRad(stand: Stand, wantedRad: number): number {
  const width = arcRad(stand)
  const past = turn(wantedRad - stand.azimuthFromRad)
  if (past <= width) return turn(wantedRad)
  return past - width < CIRCLE_RAD - past ? turn(stand.azimuthToRad) : turn(stand.azimuthFromRad)
}

/**
 * Pose within the stand's limits that catches most of the sun's beam: square to the sun where it can be.
 *
 * First the azimuth nearest to the sun's, then the tilt that is best at that azimuth, then the tilt's limits.
 *
 * @param east north up  direction of the apparent sun, of any length
 * @source worked by hand: cos θ = cos t·cos z + sin t·sin z·cos(A − As), largest at tan t = tan z·cos(A − As)
 */
export function aimAtSun(stand: Stand, east: number, north: number, up: number): Pose {
  const azimuthRad = nearestAzimuthRad(stand, Math.atan2(east, north))
  const towards = east * Math.sin(azimuthRad) + north * Math.cos(azimuthRad)
  const bestRad = Math.atan2(towards, up)
  return { tiltRad: Math.min(stand.tiltMaxRad, Math.max(stand.tiltMinRad, bestRad)), azimuthRad }
}

/**
 * The pose of an array that is turned off a pose by an angle; limits of the stand are not looked at.
 *
 * @param offRad     angle between the two directions, 0..π. [rad]
 * @param towardsRad direction of the turn: 0 tilts on, a quarter circle turns clockwise. [rad]
 * @returns tilt 0..π, azimuth 0..2π. [rad]
 * @source worked by hand on the sphere
 */
export function turnedOff({ tiltRad, azimuthRad }: Pose, offRad: number, towardsRad: number): Pose {
  const along = Math.sin(offRad) * Math.cos(towardsRad)
  const aside = Math.sin(offRad) * Math.sin(towardsRad)
  const level = Math.cos(offRad) * Math.sin(tiltRad) + along * Math.cos(tiltRad)
  const up = Math.cos(offRad) * Math.cos(tiltRad) - along * Math.sin(tiltRad)
  return { tiltRad: Math.atan2(Math.hypot(level, aside), up), azimuthRad: turn(azimuthRad + Math.atan2(aside, level)) }
}
