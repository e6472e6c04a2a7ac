import { MAX_ROUTE_POINTS } from '../documents/route.ts'
import { geodesicM } from '../engine/geodesic.ts'
import type { Notice, ProblemList } from './file-reading.ts'

/** Points of a road as a file gave them; NaN where a height is missing. */
export interface Trace {
  latDeg: number[]
  lonDeg: number[]
  elevationM: number[]
  line: number[]
  column: number[]
}

export const emptyTrace = (): Trace => ({ latDeg: [], lonDeg: [], elevationM: [], line: [], column: [] })

/** Neighbours nearer than this are one point. [m] */
const REPEAT_M = 0.01
/** A step is a jump when it is both this long and this many times the middle step. */
const JUMP_M = 5000
const JUMP_TIMES = 50
/** Longest road: half way round the Earth. [m] */
const LONGEST_ROAD_M = 20_000_000

/** Indices of the points that are kept: of neighbours at the same place the first. */
export function withoutRepeats(trace: Trace): number[] {
  const kept: number[] = []
  for (let i = 0; i < trace.latDeg.length; i++) {
    const last = kept[kept.length - 1]
    if (last === undefined || stepM(trace, last, i) >= REPEAT_M) kept.push(i)
  }
  return kept
}

function stepM(trace: Trace, i: number, j: number): number {
  if (trace.latDeg[i] === trace.latDeg[j] && trace.lonDeg[i] === trace.lonDeg[j]) return 0
  return geodesicM(rad(trace.latDeg[i]), rad(trace.lonDeg[i]), rad(trace.latDeg[j]), rad(trace.lonDeg[j]))
}

export const rad = (deg: number): number => (deg * Math.PI) / 180

/** The chosen points only. A height that only a dropped repeat knew is not lost. */
export function chosen(trace: Trace, kept: number[]): Trace {
  const of = (values: number[]) => kept.map((i) => values[i])
  const elevationM = kept.map((from, k) => {
    const to = kept[k + 1] ?? trace.elevationM.length
    for (let i = from; i < to; i++) if (!Number.isNaN(trace.elevationM[i])) return trace.elevationM[i]
    return Number.NaN
  })
  return {
    latDeg: of(trace.latDeg),
    lonDeg: of(trace.lonDeg),
    elevationM,
    line: of(trace.line),
    column: of(trace.column),
  }
}

/** Distance of each point along the road. [m] */
export function alongM(trace: Trace): Float64Array {
  const along = new Float64Array(trace.latDeg.length)
  for (let i = 1; i < along.length; i++) along[i] = along[i - 1] + stepM(trace, i - 1, i)
  return along
}

/** Reports too few points, jumps and a road too long to be one. */
export function checkTrace(trace: Trace, along: Float64Array, field: string, problems: ProblemList): void {
  const count = along.length
  if (count < 2) {
    const place = { line: trace.line[0] ?? 1, column: trace.column[0] ?? 1 }
    problems.add({ field, value: `${count}`, detail: 'expected at least 2 points at different places', ...place })
    return
  }
  const steps = along.slice(1).map((s, i) => s - along[i])
  const middleM = steps.slice().sort()[(steps.length - 1) >> 1]
  steps.forEach((stepM, i) => {
    if (stepM <= JUMP_M || stepM <= JUMP_TIMES * middleM) return
    problems.add({
      field,
      value: `${(stepM / 1000).toFixed(1)} km`,
      detail: `jump: expected at most ${(Math.max(JUMP_M, JUMP_TIMES * middleM) / 1000).toFixed(1)} km from the point before (5 km, or ${JUMP_TIMES} times the middle step of ${middleM.toFixed(0)} m)`,
      line: trace.line[i + 1],
      column: trace.column[i + 1],
    })
  })
  if (problems.count === 0 && along[count - 1] > LONGEST_ROAD_M)
    problems.add({
      field,
      value: `${(along[count - 1] / 1000).toFixed(0)} km`,
      detail: `expected a road of at most ${LONGEST_ROAD_M / 1000} km`,
      line: trace.line[count - 1],
      column: trace.column[count - 1],
    })
}

/** Keeps a point unless the route is full; the first one too many is a problem. */
export function addPoint(trace: Trace, point: number[], field: string, problems: ProblemList): void {
  const [latDeg, lonDeg, elevationM, line, column] = point
  if (trace.latDeg.length === MAX_ROUTE_POINTS) {
    const detail = `expected at most ${MAX_ROUTE_POINTS} points`
    problems.add({ field, value: `point ${MAX_ROUTE_POINTS + 1}`, detail, line, column })
  }
  trace.latDeg.push(latDeg)
  trace.lonDeg.push(lonDeg)
  trace.elevationM.push(elevationM)
  trace.line.push(line)
  trace.column.push(column)
}

export interface Bounds {
  southDeg: number
  westDeg: number
  northDeg: number
  eastDeg: number
}

/** The box around a road; west is more than east where the road crosses 180°. */
export function boundsOf({ latDeg, lonDeg }: Trace): Bounds {
  let [lon, west, east] = [lonDeg[0], lonDeg[0], lonDeg[0]]
  let [south, north] = [latDeg[0], latDeg[0]]
  for (let i = 1; i < latDeg.length; i++) {
    lon += eastwardDeg(lon, lonDeg[i])
    west = Math.min(west, lon)
    east = Math.max(east, lon)
    south = Math.min(south, latDeg[i])
    north = Math.max(north, latDeg[i])
  }
  if (east - west >= 360) return { southDeg: south, westDeg: -180, northDeg: north, eastDeg: 180 }
  return { southDeg: south, westDeg: withinHalfTurn(west), northDeg: north, eastDeg: withinHalfTurn(east) }
}

/** The short way round from one longitude to another, -180 to 180. [°] */
export const eastwardDeg = (fromDeg: number, toDeg: number): number => withinHalfTurn(toDeg - fromDeg)

function withinHalfTurn(deg: number): number {
  if (deg >= -180 && deg <= 180) return deg
  const turned = ((((deg + 180) % 360) + 360) % 360) - 180
  // Differences of decimal degrees carry rounding; ten decimals are a hundredth of a millimetre.
  return Math.round(turned * 1e10) / 1e10
}

export const repeatsNotice = (dropped: number): Notice => ({
  detail: `${dropped} repeated ${dropped === 1 ? 'point' : 'points'} left out: the same place as the point before`,
})
