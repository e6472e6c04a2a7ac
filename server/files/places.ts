import { asLabel } from './file-reading.ts'
import type { NoticeList } from './file-reading.ts'
import type { Waypoint } from './gpx-points.ts'
import type { PlaceOnRoute } from './route-reading.ts'
import { eastwardDeg, rad } from './trace.ts'
import type { Trace } from './trace.ts'

/** Farthest that a place may lie from the road and still belong to it. [m] */
const FARTHEST_M = 2000
const MOST_PLACES = 300
/** Metres of a degree of latitude; the sphere is good enough to find the nearest point within 2 km. */
const M_PER_DEG = 111_195

/** Brings waypoints to the nearest point of the road; of a road that passes twice the first pass counts. */
export function placesOnRoute(waypoints: Waypoint[], notices: NoticeList) {
  return (trace: Trace, along: Float64Array): PlaceOnRoute[] => {
    if (waypoints.length > MOST_PLACES)
      notices.add({ detail: `${waypoints.length} waypoints: only the first ${MOST_PLACES} are looked at` })
    const near = waypoints.slice(0, MOST_PLACES).map((waypoint, i) => ({
      name: asLabel(waypoint.name, `Waypoint ${i + 1}`),
      ...nearest(waypoint, trace, along),
    }))
    const far = near.filter((place) => place.offsetM > FARTHEST_M)
    if (far.length > 0)
      notices.add({ detail: `${far.length} waypoints left out: more than ${FARTHEST_M / 1000} km from the road` })
    return near.filter((place) => place.offsetM <= FARTHEST_M).sort((a, b) => a.km - b.km)
  }
}

/** Plane geometry around the waypoint: each step of the road is a straight line there. */
function nearest(waypoint: Waypoint, trace: Trace, along: Float64Array): { km: number; offsetM: number } {
  const eastScale = M_PER_DEG * Math.cos(rad(waypoint.latDeg))
  let best = { m2: Infinity, alongM: 0 }
  let [x0, y0] = [0, 0]
  for (let i = 0; i < along.length; i++) {
    const x1 = eastwardDeg(waypoint.lonDeg, trace.lonDeg[i]) * eastScale
    const y1 = (trace.latDeg[i] - waypoint.latDeg) * M_PER_DEG
    if (i > 0) {
      const [dx, dy] = [x1 - x0, y1 - y0]
      const share = Math.min(Math.max(-(x0 * dx + y0 * dy) / (dx * dx + dy * dy || 1), 0), 1)
      const m2 = (x0 + share * dx) ** 2 + (y0 + share * dy) ** 2
      if (m2 < best.m2 - 1) best = { m2, alongM: along[i - 1] + share * (along[i] - along[i - 1]) }
    }
    x0 = x1
    y0 = y1
  }
  return { km: Math.round(best.alongM) / 1000, offsetM: Math.round(Math.sqrt(best.m2)) }
}
