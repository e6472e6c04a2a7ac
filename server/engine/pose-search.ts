import { arcRad, nearestAzimuthRad, type Pose, type Stand, turn } from './stand.ts'

const RAD = Math.PI / 180
/** Widest gaps of the grid: light lies on a plane by cosines, whose hills are wider. [rad] */
const TILT_GAP_RAD = 20 * RAD
const AZIMUTH_GAP_RAD = 40 * RAD
/** First and last reach of the climb, each a quarter of the one before. [rad] */
const FIRST_REACH_RAD = 10 * RAD
const LAST_REACH_RAD = 0.1 * RAD
/** A hill that starts lower than this share of the highest is not climbed. */
const NEARLY = 0.95
const MOST_ROUNDS = 40
/** A hill that starts so near to a top belongs to it. [rad] */
const SAME_TOP_RAD = 4 * RAD
/** Hills that are climbed at most. */
const MOST_HILLS = 3

/** A pose's worth, by tilt and azimuth. [rad] */
export type Worth = (tiltRad: number, azimuthRad: number) => number

interface Found extends Pose {
  worth: number
}

/**
 * The pose of most worth within a stand's limits.
 *
 * The whole range on a grid, then a climb from each of its highest hills, with parabolas through neighbours a reach
 * apart and shorter and shorter reaches. The same question has the same answer.
 *
 * @param worth  a few smooth hills; never negative
 * @param first  pose within the limits that is known to be good; it is kept where nothing is better
 */
export function bestPose(stand: Stand, worth: Worth, first: Pose): Pose {
  const start: Found = { ...first, worth: worth(first.tiltRad, first.azimuthRad) }
  const hills = gridHills(stand, worth)
  const highest = hills[0].worth > start.worth ? hills[0] : start
  if (!(highest.worth > 0)) return first
  const tops = [climb(stand, worth, highest)]
  for (const hill of hills.slice(0, MOST_HILLS)) {
    if (hill.worth < NEARLY * tops[0].worth || tops.some((top) => apartRad(hill, top) < SAME_TOP_RAD)) continue
    tops.push(climb(stand, worth, hill))
  }
  const { tiltRad, azimuthRad } = tops.reduce((best, top) => (top.worth > best.worth ? top : best))
  return { tiltRad, azimuthRad }
}

/** Angle between the directions that two poses face. [rad] */
export function apartRad(one: Pose, other: Pose): number {
  const cos =
    Math.cos(one.tiltRad) * Math.cos(other.tiltRad) +
    Math.sin(one.tiltRad) * Math.sin(other.tiltRad) * Math.cos(one.azimuthRad - other.azimuthRad)
  return Math.acos(Math.min(1, Math.max(-1, cos)))
}

/** Poses of a grid over the stand's range that are worth no less than their neighbours, the best first. */
function gridHills(stand: Stand, worth: Worth): Found[] {
  const { tiltMinRad, tiltMaxRad, azimuthFromRad } = stand
  const arc = arcRad(stand)
  const isRound = arc === 2 * Math.PI
  const tilts = Math.ceil((tiltMaxRad - tiltMinRad) / TILT_GAP_RAD - 1e-9) + 1
  const azimuths = Math.max(1, Math.ceil(arc / AZIMUTH_GAP_RAD - 1e-9) + (isRound ? 0 : 1))
  const tiltAt = (t: number): number =>
    tilts === 1 ? tiltMinRad : tiltMinRad + ((tiltMaxRad - tiltMinRad) * t) / (tilts - 1)
  const gap = azimuths === 1 ? 0 : arc / (isRound ? azimuths : azimuths - 1)
  const grid = new Float64Array(tilts * azimuths)
  for (let t = 0; t < tilts; t++)
    for (let a = 0; a < azimuths; a++)
      grid[t * azimuths + a] =
        a > 0 && tiltAt(t) === 0 ? grid[t * azimuths] : worth(tiltAt(t), turn(azimuthFromRad + a * gap))
  const valueAt = (t: number, a: number): number => {
    if (t < 0 || t >= tilts || (!isRound && (a < 0 || a >= azimuths))) return Number.NEGATIVE_INFINITY
    return grid[t * azimuths + ((a + azimuths) % azimuths)]
  }
  const hills: Found[] = []
  for (let t = 0; t < tilts; t++)
    for (let a = 0; a < azimuths; a++) {
      const value = valueAt(t, a)
      if (value < valueAt(t - 1, a) || value < valueAt(t + 1, a)) continue
      if (value < valueAt(t, a - 1) || value < valueAt(t, a + 1)) continue
      hills.push({ tiltRad: tiltAt(t), azimuthRad: turn(azimuthFromRad + a * gap), worth: value })
    }
  return hills.sort((one, other) => other.worth - one.worth)
}

/** Uphill from a pose to the top of its hill, as near as the last reach. */
function climb(stand: Stand, worth: Worth, from: Found): Found {
  let top = from
  let reach = FIRST_REACH_RAD
  for (let round = 0; round < MOST_ROUNDS && reach >= LAST_REACH_RAD; round++) {
    const next = around(stand, worth, top, reach)
    const isFar = apartRad(next, top) > 0.9 * reach
    top = next
    if (!isFar) reach /= 4
  }
  return top
}

/** The best of a pose, its neighbours a reach away up, down and to both sides, and the top of the parabolas through them. */
function around(stand: Stand, worth: Worth, at: Found, reach: number): Found {
  let best = at
  const look = (alongRad: number, asideRad: number): number => {
    const { tiltRad, azimuthRad } = moved(stand, at, alongRad, asideRad)
    const value = worth(tiltRad, azimuthRad)
    if (value > best.worth) best = { tiltRad, azimuthRad, worth: value }
    return value
  }
  const sample = (x: number, y: () => number): Sample => ({ x, y: x === 0 ? Number.NaN : y() })
  const here = { x: 0, y: at.worth }
  const { down, up, left, right } = room(stand, at, reach)
  const along = vertex(
    sample(-down, () => look(-down, 0)),
    here,
    sample(up, () => look(up, 0)),
  )
  const aside = vertex(
    sample(-left, () => look(0, -left)),
    here,
    sample(right, () => look(0, right)),
  )
  if (along !== 0) look(along, 0)
  if (aside !== 0) look(along, aside)
  return best
}

/** How far a pose can be moved within the limits, a reach at most; over the top only where the stand turns all round. [rad] */
function room(stand: Stand, at: Pose, reach: number) {
  const arc = arcRad(stand)
  const isRound = arc === 2 * Math.PI
  const up = Math.min(reach, stand.tiltMaxRad - at.tiltRad)
  const down = isRound && stand.tiltMinRad === 0 ? reach : Math.min(reach, at.tiltRad - stand.tiltMinRad)
  if (isRound || at.tiltRad < reach) return { down, up, left: reach, right: reach }
  const past = Math.min(turn(at.azimuthRad - stand.azimuthFromRad + 1e-12), arc)
  const slope = Math.sin(at.tiltRad)
  return { down, up, left: Math.min(reach, past * slope), right: Math.min(reach, (arc - past) * slope) }
}

/** A pose turned along its tilt and, on a great circle, across it; drawn back to the stand's limits. */
function moved(stand: Stand, at: Pose, alongRad: number, asideRad: number): Pose {
  const tilt = at.tiltRad + alongRad
  const cos = Math.cos(tilt) * Math.cos(asideRad)
  const azimuth = at.azimuthRad + Math.atan2(Math.sin(asideRad), Math.sin(tilt) * Math.cos(asideRad))
  return {
    tiltRad: Math.min(stand.tiltMaxRad, Math.max(stand.tiltMinRad, Math.acos(cos))),
    azimuthRad: nearestAzimuthRad(stand, azimuth),
  }
}

interface Sample {
  x: number
  y: number
}

/** Top of the parabola through three samples, held between the outer two; the best sample where it has none. */
function vertex(low: Sample, middle: Sample, high: Sample): number {
  const left = (middle.y - low.y) / (middle.x - low.x)
  const right = (high.y - middle.y) / (high.x - middle.x)
  const bend = right - left
  if (bend < 0) {
    const at = 0.5 * (low.x + middle.x) - (left * 0.5 * (high.x - low.x)) / bend
    return Math.min(high.x, Math.max(low.x, at))
  }
  if (high.y > middle.y && !(low.y > high.y)) return high.x
  return low.y > middle.y ? low.x : middle.x
}
