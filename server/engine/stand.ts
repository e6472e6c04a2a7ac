/** How a stand can hold the lifted array: tilt from level, and azimuth on a clockwise arc. */
export interface Stand {
  tiltMinRad: number
  tiltMaxRad: number
  /** Clockwise from true north; the arc runs clockwise from here … [rad] */
  azimuthFromRad: number
  /** … to here; 2π or more beyond it is the whole circle, equal is one azimuth only. [rad] */
  azimuthToRad: number
}

const CIRCLE_RAD = 2 * Math.PI
const turn = (rad: number): number => ((rad % CIRCLE_RAD) + CIRCLE_RAD) % CIRCLE_RAD

/** The arc's azimuth nearest to a wanted one. [rad] */
function nearestAzimuthRad(stand: Stand, wantedRad: number): number {
  const { azimuthFromRad, azimuthToRad } = stand
  if (azimuthToRad - azimuthFromRad >= CIRCLE_RAD - 1e-9) return turn(wantedRad)
  const width = turn(azimuthToRad - azimuthFromRad)
  const past = turn(wantedRad - azimuthFromRad)
  if (past <= width) return turn(wantedRad)
  return past - width < CIRCLE_RAD - past ? turn(azimuthToRad) : turn(azimuthFromRad)
}

/**
 * Pose within the stand's limits that catches most of the sun's beam: square to the sun where it can be.
 *
 * First the azimuth nearest to the sun's, then the tilt that is best at that azimuth, then the tilt's limits.
 *
 * @param east north up  direction of the apparent sun, length 1
 * @returns tilt from level and azimuth clockwise from true north. [rad]
 * @source worked by hand: cos θ = cos t·cos z + sin t·sin z·cos(A − As), largest at tan t = tan z·cos(A − As)
 */
export function aimAtSun(
  stand: Stand,
  east: number,
  north: number,
  up: number,
): { tiltRad: number; azimuthRad: number } {
  const azimuthRad = nearestAzimuthRad(stand, Math.atan2(east, north))
  const towards = east * Math.sin(azimuthRad) + north * Math.cos(azimuthRad)
  const bestRad = Math.atan2(towards, up)
  return { tiltRad: Math.min(stand.tiltMaxRad, Math.max(stand.tiltMinRad, bestRad)), azimuthRad }
}
