import { asinNear, cotNear, expNear, nearbySlots, powerNear } from './nearby.ts'
import { type Along, extraterrestrialWm2, refractionScale, type SunDirections } from './sun.ts'

const DEG = 180 / Math.PI
const RAD = Math.PI / 180
const HALF_TURN = Math.PI / 2
const DAY_MS = 86_400_000
/** Sine of the altitude below which SPA has no refraction: -0.83337 deg. */
const REFRACTION_ENDS = Math.sin(-0.83337 / DEG)
/** Saemundsson's factor at 1010 hPa and 10 °C: 1.02 minutes of arc. [rad] */
const REFRACTION_RAD = 1.02 / 60 / DEG
/** Relative air mass at the horizon by Kasten–Young; given for a sun below it. */
const HORIZON_AIR_MASS = 1 / (0.50572 * (96.07995 - 90) ** -1.6364)

/** The apparent sun and the cloudless sky, step by step. */
export interface ClearSkyAlong {
  apparentZenithRad: Float64Array
  extraWm2: Float64Array
  airMass: Float64Array
  ghiWm2: Float64Array
  dniWm2: Float64Array
  dhiWm2: Float64Array
}

/** Air and turbidity at each step. */
export interface AirAlong {
  airC: Float64Array
  pressurePa: Float64Array
  linke: Float64Array
}

/**
 * Apparent sun, air mass and clear sky at each step: `refractionRad`, `relativeAirMass` and `clearSkyWm2` in one
 * pass, each costly function followed by a series around a recent value (`nearby.ts`); within 1e-7 of them.
 *
 * @param sun    true direction towards the sun (count)
 * @param along  instants and heights
 * @param air    pressure, temperature and Linke turbidity (count each)
 * @source see refractionRad, relativeAirMass, clearSkyWm2
 */
export function clearSkyAlong(sun: SunDirections, along: Along, air: AirAlong): ClearSkyAlong {
  const sky = emptySky(along.count)
  const cosZenith = apparentSunAlong(sky, sun, air)
  setExtraterrestrial(sky.extraWm2, along.atMs)
  setClearLight(sky, cosZenith, along.altM, air)
  return sky
}

const emptySky = (count: number): ClearSkyAlong => ({
  apparentZenithRad: new Float64Array(count),
  extraWm2: new Float64Array(count),
  airMass: new Float64Array(count),
  ghiWm2: new Float64Array(count),
  dniWm2: new Float64Array(count),
  dhiWm2: new Float64Array(count),
})

function setExtraterrestrial(extraWm2: Float64Array, atMs: Float64Array): void {
  let dayMs = Number.NaN
  let now = 0
  for (let i = 0; i < extraWm2.length; i++) {
    const since = atMs[i] - dayMs
    if (!(since >= 0 && since < DAY_MS)) {
      dayMs = Math.floor(atMs[i] / DAY_MS) * DAY_MS
      now = extraterrestrialWm2(atMs[i])
    }
    extraWm2[i] = now
  }
}

/** Sets apparent zenith and air mass; returns the cosine of the apparent zenith at each step. */
function apparentSunAlong(sky: ClearSkyAlong, sun: SunDirections, air: AirAlong): Float64Array {
  const { apparentZenithRad, airMass } = sky
  const { east, north, up } = sun
  const { pressurePa, airC } = air
  const cosZenith = new Float64Array(up.length)
  const slots = nearbySlots(12)
  for (let i = 0; i < up.length; i++) {
    const flat = Math.sqrt(east[i] * east[i] + north[i] * north[i])
    const altitude = asinNear(slots, 0, up[i], flat)
    const deg = altitude * DEG
    const lift =
      up[i] < REFRACTION_ENDS
        ? 0
        : refractionScale(pressurePa[i], airC[i]) *
          REFRACTION_RAD *
          cotNear(slots, 3, (deg + 10.3 / (deg + 5.11)) * RAD)
    const q = lift * lift
    const cosine = up[i] * (1 - q * (1 / 2 - q * (1 / 24))) + flat * lift * (1 - q * (1 / 6))
    const zenith = Math.abs(HALF_TURN - altitude - lift)
    cosZenith[i] = cosine
    apparentZenithRad[i] = zenith
    airMass[i] =
      cosine > 0 ? 1 / (cosine + 0.50572 * powerNear(slots, 5, 96.07995 - zenith * DEG, -1.6364)) : HORIZON_AIR_MASS
  }
  return cosZenith
}

/** Sets the clear sky's irradiance while the sun is up; the equations stand in `clearSkyWm2`. */
function setClearLight(sky: ClearSkyAlong, cosZenith: Float64Array, altM: Float64Array, air: AirAlong): void {
  const { airMass, extraWm2, ghiWm2, dniWm2, dhiWm2 } = sky
  const { pressurePa, linke } = air
  const slots = nearbySlots(10)
  for (let i = 0; i < cosZenith.length; i++) {
    if (!(cosZenith[i] > 0)) continue
    const absolute = airMass[i] * pressurePa[i] * (1 / 101_325)
    const fh1 = expNear(slots, 0, altM[i] * (-1 / 8000))
    const fh2 = expNear(slots, 2, altM[i] * (-1 / 1250))
    const depth = (3.92e-5 * altM[i] + 0.0387) * absolute * (fh1 + fh2 * (linke[i] - 1))
    const ghi = (5.09e-5 * altM[i] + 0.868) * extraWm2[i] * cosZenith[i] * expNear(slots, 4, -depth)
    const direct = extraWm2[i] * (0.664 + 0.163 / fh1) * expNear(slots, 6, -0.09 * absolute * (linke[i] - 1))
    const scattered = ((0.1 - 0.2 * expNear(slots, 8, -linke[i])) * fh1) / (0.1 * fh1 + 0.882)
    const limit = ghi * Math.max(1 - scattered, 0)
    const isDirect = direct * cosZenith[i] <= limit
    ghiWm2[i] = ghi
    dniWm2[i] = isDirect ? direct : limit / cosZenith[i]
    dhiWm2[i] = ghi - (isDirect ? direct * cosZenith[i] : limit)
  }
}
