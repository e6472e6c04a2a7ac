import { geodesicM } from '../engine/geodesic.ts'
import { asLabel, noticeList, overLimit, problemList } from './file-reading.ts'
import type { Notice } from './file-reading.ts'
import { gpxPoints } from './gpx-points.ts'
import type { GpxLine } from './gpx-points.ts'
import { placesOnRoute } from './places.ts'
import { routeOf } from './route-reading.ts'
import type { RouteReading } from './route-reading.ts'
import { rad } from './trace.ts'

/** A gap between segments shorter than this is not worth a word. [m] */
const GAP_M = 50

/**
 * The route of a GPX 1.1 text, or every problem with line and column.
 *
 * Tracks win over routes when a file holds both. Segments, tracks and routes are joined in the order of the file.
 * Waypoints within 2 km of the road come back in the summary with their place along it.
 */
export function readGpxRoute(text: string, options: { name?: string } = {}): RouteReading {
  const tooLarge = overLimit(text.length)
  if (tooLarge !== null) return { problems: [tooLarge] }
  const problems = problemList()
  const content = gpxPoints(text.replace(/^\uFEFF/, ''), problems)
  if (problems.count > 0) return { problems: problems.list() }
  const notices = noticeList()
  content.notices.forEach((notice) => notices.add(notice))
  const isTrack = content.track.trace.latDeg.length > 0
  const line = isTrack ? content.track : content.route
  if (isTrack && content.route.trace.latDeg.length > 0)
    notices.add({ detail: 'the file holds tracks and routes: the tracks are the road, the routes are left out' })
  joins(line, isTrack ? 'track' : 'route').forEach((notice) => notices.add(notice))
  const parts = {
    name: asLabel(options.name ?? line.name ?? content.name, 'Route'),
    field: isTrack ? 'trkpt' : 'rtept',
    places: placesOnRoute(content.waypoints, notices),
  }
  return routeOf(line.trace, parts, { notices, problems })
}

/** One notice for several tracks, and one for each gap that a straight line now bridges. */
function joins(line: GpxLine, word: string): Notice[] {
  const { latDeg, lonDeg } = line.trace
  const notices: Notice[] = []
  if (line.parents > 1) notices.push({ detail: `${line.parents} ${word}s, joined in the order of the file` })
  const filled = line.segments.filter((s, i) => s.first < (line.segments[i + 1]?.first ?? latDeg.length))
  if (filled.length > 1) notices.push({ detail: `${filled.length} segments, joined in the order of the file` })
  for (const { first, line: at } of filled.slice(1)) {
    const gapM = geodesicM(rad(latDeg[first - 1]), rad(lonDeg[first - 1]), rad(latDeg[first]), rad(lonDeg[first]))
    if (gapM >= GAP_M)
      notices.push({ detail: `gap of ${(gapM / 1000).toFixed(2)} km before this segment, bridged straight`, line: at })
  }
  return notices
}
