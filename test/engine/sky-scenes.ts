import { clearSkyWm2, relativeAirMass } from '../../server/engine/clear-sky.ts'
import { prepareSky, type SkyPlaceInput, type Weather, weatherAlong } from '../../server/engine/sky.ts'
import { type Along, extraterrestrialWm2, refractionRad, sunPath, trueSun } from '../../server/engine/sun.ts'

const RAD = Math.PI / 180
export const HOUR_MS = 3_600_000

/** Invented place on a southern high desert in October; UTC+2, so that midnight UTC is night there. */
export const SALTPAN = { latRad: -22.9 * RAD, lonRad: 15.6 * RAD, altM: 1210 }
export const DAY_START_MS = Date.UTC(2026, 9, 14)

/** Rows of equal length from the start of the day. */
export function rowsOf(count: number, lengthMs: number): { fromMs: Float64Array; toMs: Float64Array } {
  const fromMs = Float64Array.from({ length: count }, (_, row) => DAY_START_MS + row * lengthMs)
  return { fromMs, toMs: fromMs.map((from) => from + lengthMs) }
}

/** A car standing at a place, asked at given instants. */
export function standing(place: { latRad: number; lonRad: number; altM: number }, atMs: Float64Array): Along {
  const all = (value: number): Float64Array => new Float64Array(atMs.length).fill(value)
  return { count: atMs.length, atMs, latRad: all(place.latRad), lonRad: all(place.lonRad), altM: all(place.altM) }
}

/** Middles of `count` equal steps over a row: their mean is the row's mean. */
export const middles = (fromMs: number, toMs: number, count: number): Float64Array =>
  Float64Array.from({ length: count }, (_, i) => fromMs + ((i + 0.5) * (toMs - fromMs)) / count)

export const mean = (values: Float64Array): number => values.reduce((sum, value) => sum + value, 0) / values.length

/** Weather of places at instants, at the first place. */
export function weatherAt(places: SkyPlaceInput[], atMs: Float64Array, linkeDefault = 3): Weather {
  const along = standing(places[0], atMs)
  return weatherAlong(
    prepareSky({ places, linkeDefault }),
    sunPath(DAY_START_MS - HOUR_MS, DAY_START_MS + 60 * HOUR_MS),
    along,
  )
}

/** Sun and clear sky of one step by the plain functions, one after the other. */
export function exactClearSky(along: Along, weather: Weather, i: number, linke: number) {
  const { altitudeRad } = trueSun(along.atMs[i], along.latRad[i], along.lonRad[i])
  const lift = refractionRad(altitudeRad, weather.pressurePa[i], weather.airC[i])
  const apparentZenithRad = Math.PI / 2 - altitudeRad - lift
  const airMass = relativeAirMass(apparentZenithRad)
  const absolute = (airMass * weather.pressurePa[i]) / 101_325
  const extraWm2 = extraterrestrialWm2(along.atMs[i])
  const clear = clearSkyWm2({ apparentZenithRad, airMass: absolute, linke, altM: along.altM[i], extraWm2 })
  return { apparentZenithRad, airMass, extraWm2, ...clear }
}
