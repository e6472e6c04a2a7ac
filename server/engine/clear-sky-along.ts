import { asinNear, cotNear, expNear, nearbySlots, powerNear } from './nearby.ts'
import { type Along, extraterrestrialWm2, refractionScale } from './sun.ts'

const DEG = 180 / Math.PI
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
 * @param up     sine of the sun's true altitude (count)
 * @param along  instants and heights
 * @param air    pressure, temperature and Linke turbidity (count each)
 * @source see refractionRad, relativeAirMass, clearSkyWm2
 */
export function clearSkyAlong(up: Float64Array, along: Along, air: AirAlong): ClearSkyAlong {
  const sky = emptySky(along.count)
  const horizon = nearbySlots(12)
  const light = nearbySlots(12)
  let day = Number.NaN
  let extraWm2 = 0
  for (let i = 0; i < along.count; i++) {
    if (Math.floor(along.atMs[i] / DAY_MS) !== day) {
      day = Math.floor(along.atMs[i] / DAY_MS)
      extraWm2 = extraterrestrialWm2(along.atMs[i])
    }
    sky.extraWm2[i] = extraWm2
    const cosZenith = apparentSun(sky, i, up[i], refractionScale(air.pressurePa[i], air.airC[i]), horizon)
    if (!(cosZenith > 0)) continue
    const airMass = (sky.airMass[i] * air.pressurePa[i]) / 101_325
    clearLight(sky, i, light, cosZenith, airMass, air.linke[i], along.altM[i])
  }
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

/** Sets apparent zenith and air mass of a step; returns the cosine of the apparent zenith. */
function apparentSun(sky: ClearSkyAlong, i: number, up: number, scale: number, slots: Float64Array): number {
  const flat = Math.sqrt(Math.max(1 - up * up, 0))
  const altitude = asinNear(slots, 0, up, flat)
  const deg = altitude * DEG
  const lift =
    up < REFRACTION_ENDS ? 0 : scale * REFRACTION_RAD * cotNear(slots, 3, (deg + 10.3 / (deg + 5.11)) / DEG)
  const zenith = Math.abs(HALF_TURN - altitude - lift)
  const q = lift * lift
  const cosZenith = up * (1 - q * (0.5 - q / 24)) + flat * lift * (1 - q / 6)
  sky.apparentZenithRad[i] = zenith
  sky.airMass[i] =
    cosZenith > 0
      ? 1 / (cosZenith + 0.50572 * powerNear(slots, 5, 96.07995 - zenith * DEG, -1.6364))
      : HORIZON_AIR_MASS
  return cosZenith
}

/** Sets the clear sky's irradiance of a step; the equations stand in `clearSkyWm2`. */
function clearLight(
  sky: ClearSkyAlong,
  i: number,
  slots: Float64Array,
  cosZenith: number,
  airMass: number,
  linke: number,
  altM: number,
): void {
  const extraWm2 = sky.extraWm2[i]
  const fh1 = expNear(slots, 0, -altM / 8000)
  const fh2 = expNear(slots, 2, -altM / 1250)
  const depth = (3.92e-5 * altM + 0.0387) * airMass * (fh1 + fh2 * (linke - 1))
  const ghi = (5.09e-5 * altM + 0.868) * extraWm2 * cosZenith * expNear(slots, 4, -depth)
  const direct = extraWm2 * (0.664 + 0.163 / fh1) * expNear(slots, 6, -0.09 * airMass * (linke - 1))
  const scattered = (0.1 - 0.2 * expNear(slots, 8, -linke)) / (0.1 + 0.882 / fh1)
  const horizontal = Math.min(direct * cosZenith, ghi * Math.max(1 - scattered, 0))
  sky.ghiWm2[i] = ghi
  sky.dniWm2[i] = horizontal / cosZenith
  sky.dhiWm2[i] = ghi - horizontal
}
