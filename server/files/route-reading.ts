import { routeDocument } from '../documents/route.ts'
import type { RouteDocument, RouteInput } from '../documents/route.ts'
import { climbM, fillHeights, smoothHeights } from './elevation.ts'
import { checkedReading } from './file-reading.ts'
import type { FileReading, NoticeList, ProblemList } from './file-reading.ts'
import { alongM, boundsOf, checkTrace, chosen, repeatsNotice, withoutRepeats } from './trace.ts'
import type { Bounds, Trace } from './trace.ts'

/** A named place of the file, brought to the road. */
export interface PlaceOnRoute {
  name: string
  km: number
  offsetM: number
}

export interface RouteSummary {
  lengthKm: number
  points: number
  climbBeforeM: number | null
  climbAfterM: number | null
  bounds: Bounds
  places: PlaceOnRoute[]
}

export type RouteReading = FileReading<RouteDocument, RouteSummary>
type Stretches = NonNullable<RouteInput['stretches']>

/** What a kind of file adds to the points: its name, its stretches, its places, by the distance of each point kept. */
export interface RouteParts {
  name: string
  field: string
  stretches?: (along: Float64Array, kept: number[]) => Stretches
  places?: (trace: Trace, along: Float64Array) => PlaceOnRoute[]
}

/** The route of a file's points: repeats dropped, jumps refused, missing heights filled, noise smoothed. */
export function routeOf(
  raw: Trace,
  parts: RouteParts,
  found: { notices: NoticeList; problems: ProblemList },
): RouteReading {
  const { notices, problems } = found
  const kept = withoutRepeats(raw)
  if (kept.length < raw.latDeg.length) notices.add(repeatsNotice(raw.latDeg.length - kept.length))
  const trace = chosen(raw, kept)
  const along = alongM(trace)
  checkTrace(trace, along, parts.field, problems)
  if (problems.count > 0) return { problems: problems.list() }
  const heights = heightsOf(trace, along, notices)
  const input: RouteInput = {
    name: parts.name,
    points: { latDeg: trace.latDeg, lonDeg: trace.lonDeg, ...(heights && { elevationM: heights.elevationM }) },
    ...(heights && { elevation: heights.elevation }),
    stretches: parts.stretches?.(along, kept) ?? [],
  }
  if (problems.count > 0) return { problems: problems.list() }
  const summary: RouteSummary = {
    lengthKm: along[along.length - 1] / 1000,
    points: trace.latDeg.length,
    climbBeforeM: heights?.elevation.climbBeforeM ?? null,
    climbAfterM: heights?.elevation.climbAfterM ?? null,
    bounds: boundsOf(trace),
    places: parts.places?.(trace, along) ?? [],
  }
  return checkedReading(routeDocument, input, { notices: notices.list(), summary })
}

function heightsOf(trace: Trace, along: Float64Array, notices: NoticeList) {
  if (trace.elevationM.every(Number.isNaN)) {
    notices.add({ detail: 'no heights in the file: the route has none, and no climb' })
    return undefined
  }
  const recordedM = Float64Array.from(trace.elevationM)
  const filled = fillHeights(along, recordedM)
  if (filled > 0)
    notices.add({
      detail: `${filled} of ${along.length} points had no height; filled along the road`,
      line: lineOfFirstGap(trace),
    })
  const smooth = smoothHeights(along, recordedM)
  const elevationM = Array.from(smooth.elevationM, centimetres)
  const climbAfterM = climbM(Float64Array.from(elevationM))
  return { elevationM, elevation: { method: smooth.method, climbBeforeM: smooth.climbBeforeM, climbAfterM } }
}

const lineOfFirstGap = (trace: Trace): number => trace.line[trace.elevationM.findIndex(Number.isNaN)]

/** Heights to the centimetre, within what a route may hold: a spline may overshoot its ends by a hair. */
const centimetres = (m: number): number => Math.min(Math.max(Math.round(m * 100) / 100, -500), 9000)
