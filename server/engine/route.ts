import { bearingRad, cumulativeM, turnRad } from './geodesic.ts'
import { InputError } from './input-error.ts'

export { cumulativeM, geodesicM } from './geodesic.ts'

/** Cuts closer together than this are one place. [m] */
const ONE_PLACE_M = 1e-3

/** The road as points in the order of driving. */
export interface RoadPoints {
  latRad: Float64Array
  lonRad: Float64Array
  altM: Float64Array
}

/** A part of the road with a speed limit, a surface or expected halts of its own. */
export interface Stretch {
  fromM: number
  toM: number
  limitMps?: number
  surfaceFactor?: number
  haltsPerM?: number
}

/** Summits and valleys nearer than this to another edge are no edges, so that pieces stay few. [m] */
const TURN_APART_M = 150

/** Where the road must be cut, and how long a piece is meant to be. */
export interface Cutting {
  /** Places that must be edges of pieces: stages, stops. */
  cutsM: number[]
  /** Meant length of a piece; real ones are three quarters to one and a half of it, shorter only between two cuts. */
  lengthM: number
  /** Summits and valleys that rise or fall by so much on both sides are edges too; none where left out. [m] */
  swingM?: number
}

/** The road as the engine drives it: each piece with one grade, heading, limit and surface. */
export interface Pieces {
  count: number
  fromM: Float64Array
  lengthM: Float64Array
  /** Middle of each piece. */
  latRad: Float64Array
  lonRad: Float64Array
  altM: Float64Array
  startAltM: Float64Array
  endAltM: Float64Array
  gradeRad: Float64Array
  headingRad: Float64Array
  /** Infinity where no limit is posted. */
  limitMps: Float64Array
  surfaceFactor: Float64Array
  haltsPerM: Float64Array
}

/**
 * Cuts a road into pieces of about one length, exactly at the cuts and at the ends of stretches (to a millimetre).
 *
 * A piece's grade is that of a straight line between its ends and its heading that of the line between
 * them: bends, and hills below the swing, inside a piece are not seen. Where stretches overlap, the lowest limit holds and
 * of the rest what the later stretch gives. Repeated points and points that stand still do no harm.
 *
 * @param points    at least two places that differ. [rad, rad, m]
 * @param stretches in any order; one may end beyond the road's end. [m]
 * @param cutting   places that must be edges, within the road, and the meant length of a piece. [m]
 * @throws InputError naming the point, stretch or cut that is wrong
 */
export function pieces(points: RoadPoints, stretches: readonly Stretch[], cutting: Cutting): Pieces {
  checkPoints(points)
  const wayM = cumulativeM(points)
  const totalM = wayM[wayM.length - 1]
  if (!(totalM > 0))
    throw new InputError('too-short', 'points', 'all points are one place, a road with length expected')
  checkStretches(stretches, totalM)
  checkCutting(cutting, totalM)
  const fixedM = fixedEdges(stretches, cutting.cutsM, totalM)
  const turnsM = cutting.swingM === undefined ? [] : turns(points.altM, wayM, cutting.swingM)
  const edgesM = pieceEdges(joined(fixedM, turnsM, TURN_APART_M), cutting.lengthM)
  const road = newPieces(edgesM.length - 1)
  placePieces(road, points, wayM, edgesM)
  for (const stretch of stretches) applyStretch(road, stretch)
  return road
}

function checkPoints({ latRad, lonRad, altM }: RoadPoints): void {
  const n = latRad.length
  if (n < 2 || lonRad.length !== n || altM.length !== n) {
    const given = `${n} latitudes, ${lonRad.length} longitudes and ${altM.length} altitudes given`
    throw new InputError('bad-table', 'points', `${given}, as many of each expected, at least 2`)
  }
  for (let i = 0; i < n; i++) {
    if (!(Math.abs(latRad[i]) <= Math.PI / 2)) {
      throw new InputError('out-of-range', `points.latRad[${i}]`, `${latRad[i]} given, -π/2 to π/2 expected`)
    }
    if (!(Math.abs(lonRad[i]) <= 2 * Math.PI)) {
      throw new InputError('out-of-range', `points.lonRad[${i}]`, `${lonRad[i]} given, -2π to 2π expected`)
    }
    if (!(Math.abs(altM[i]) <= 9000)) {
      throw new InputError('out-of-range', `points.altM[${i}]`, `${altM[i]} given, -9000 to 9000 expected`)
    }
  }
}

function checkStretches(stretches: readonly Stretch[], totalM: number): void {
  for (const [i, { fromM, toM, limitMps = 1, surfaceFactor = 1, haltsPerM = 0 }] of stretches.entries()) {
    const check = (name: string, isGood: boolean, given: string, wanted: string): void => {
      if (!isGood) throw new InputError('out-of-range', `stretches[${i}].${name}`, `${given} given, ${wanted} expected`)
    }
    check('fromM', fromM >= 0 && fromM < totalM, `${fromM}`, `at least 0 and below the road's ${totalM}`)
    check('toM', toM > fromM, `${toM}`, `more than fromM ${fromM}`)
    check('limitMps', limitMps > 0, `${limitMps}`, 'a number above 0')
    check('surfaceFactor', surfaceFactor > 0 && surfaceFactor < Infinity, `${surfaceFactor}`, 'a number above 0')
    check('haltsPerM', haltsPerM >= 0 && haltsPerM < Infinity, `${haltsPerM}`, 'a number of at least 0')
  }
}

function checkCutting({ cutsM, lengthM }: Cutting, totalM: number): void {
  if (!(lengthM >= 1)) throw new InputError('out-of-range', 'lengthM', `${lengthM} given, at least 1 expected`)
  for (const [i, cutM] of cutsM.entries()) {
    if (cutM >= 0 && cutM <= totalM + ONE_PLACE_M) continue
    throw new InputError('out-of-range', `cutsM[${i}]`, `${cutM} given, 0 to the road's ${totalM} expected`)
  }
}

/** Ways from the start that must be edges, ascending: cuts first, stretch ends where no cut is next to them. */
function fixedEdges(stretches: readonly Stretch[], cutsM: readonly number[], totalM: number): number[] {
  const within = (ways: readonly number[]): number[] => ways.filter((m) => m < totalM).sort((a, b) => a - b)
  const ends = stretches.flatMap(({ fromM, toM }) => [fromM, toM])
  return joined(joined([0, totalM], within(cutsM), ONE_PLACE_M), within(ends), ONE_PLACE_M)
}

/** Two ascending lists as one; of the second only what is so far from all that is already there. */
function joined(edgesM: readonly number[], moreM: readonly number[], apartM: number): number[] {
  const out: number[] = []
  let next = 0
  for (const m of moreM) {
    while (next < edgesM.length && edgesM[next] <= m) out.push(edgesM[next++])
    const isFree = out.length === 0 || m - out[out.length - 1] >= apartM
    if (isFree && (next === edgesM.length || edgesM[next] - m >= apartM)) out.push(m)
  }
  while (next < edgesM.length) out.push(edgesM[next++])
  return out
}

/** Summits and valleys in turn, as ways from the start: each lies so far above or below the ones beside it. */
function turns(altM: Float64Array, wayM: Float64Array, swingM: number): number[] {
  const found: number[] = []
  let high = 0
  let low = 0
  let isRising: boolean | null = null
  for (let i = 1; i < altM.length; i++) {
    if (altM[i] > altM[high]) high = i
    if (altM[i] < altM[low]) low = i
    const isSummit: boolean = isRising !== false && altM[high] - altM[i] >= swingM
    if (!isSummit && (isRising === true || altM[i] - altM[low] < swingM)) continue
    found.push(wayM[isSummit ? high : low])
    isRising = !isSummit
    high = i
    low = i
  }
  return found
}

/** Edges of the pieces from 0 to the end: every place that must be one, and even cuts between. */
function pieceEdges(fixedM: readonly number[], lengthM: number): Float64Array {
  const edges = [0]
  for (let k = 1; k < fixedM.length; k++) {
    const spanM = fixedM[k] - fixedM[k - 1]
    const n = Math.max(1, Math.round(spanM / lengthM))
    for (let i = 1; i < n; i++) edges.push(fixedM[k - 1] + (spanM * i) / n)
    edges.push(fixedM[k])
  }
  return Float64Array.from(edges)
}

function newPieces(count: number): Pieces {
  const column = (): Float64Array => new Float64Array(count)
  return {
    count,
    fromM: column(),
    lengthM: column(),
    latRad: column(),
    lonRad: column(),
    altM: column(),
    startAltM: column(),
    endAltM: column(),
    gradeRad: column(),
    headingRad: column(),
    limitMps: column().fill(Infinity),
    surfaceFactor: column().fill(1),
    haltsPerM: column(),
  }
}

/** Walks the points once and sets down where each piece starts, has its middle and ends. */
function placePieces(road: Pieces, points: RoadPoints, wayM: Float64Array, edgesM: Float64Array): void {
  const walk = walker(points, wayM)
  walk.to(0)
  for (let i = 0; i < road.count; i++) {
    const { latRad, lonRad, altM } = walk
    const lengthM = edgesM[i + 1] - edgesM[i]
    road.fromM[i] = edgesM[i]
    road.lengthM[i] = lengthM
    road.startAltM[i] = altM
    walk.to(edgesM[i] + lengthM / 2)
    road.latRad[i] = walk.latRad
    road.lonRad[i] = walk.lonRad
    road.altM[i] = walk.altM
    walk.to(edgesM[i + 1])
    road.endAltM[i] = walk.altM
    road.gradeRad[i] = Math.atan((walk.altM - altM) / lengthM)
    road.headingRad[i] = bearingRad(latRad, lonRad, walk.latRad, walk.lonRad)
  }
}

/** A place that moves forward along the points; `to` sets it to a way from the start. */
function walker({ latRad, lonRad, altM }: RoadPoints, wayM: Float64Array) {
  let i = 0
  const place = {
    latRad: latRad[0],
    lonRad: lonRad[0],
    altM: altM[0],
    to(m: number): void {
      while (i < wayM.length - 2 && wayM[i + 1] < m) i++
      const stepM = wayM[i + 1] - wayM[i]
      const share = stepM > 0 ? (m - wayM[i]) / stepM : 0
      place.latRad = latRad[i] + share * (latRad[i + 1] - latRad[i])
      place.lonRad = lonRad[i] + share * turnRad(lonRad[i], lonRad[i + 1])
      place.altM = altM[i] + share * (altM[i + 1] - altM[i])
    },
  }
  return place
}

function applyStretch(road: Pieces, stretch: Stretch): void {
  for (let i = 0; i < road.count; i++) {
    const middleM = road.fromM[i] + road.lengthM[i] / 2
    if (middleM < stretch.fromM || middleM >= stretch.toM) continue
    if (stretch.limitMps !== undefined) road.limitMps[i] = Math.min(road.limitMps[i], stretch.limitMps)
    if (stretch.surfaceFactor !== undefined) road.surfaceFactor[i] = stretch.surfaceFactor
    if (stretch.haltsPerM !== undefined) road.haltsPerM[i] = stretch.haltsPerM
  }
}
