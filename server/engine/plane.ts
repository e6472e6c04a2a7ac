/** Where a plane's light comes from, in the three shares that every sky model here is made of. */
export interface SkyShares {
  /** Scattered light from around the sun, on a surface square to it. [W/m²] */
  aroundSunWm2: number
  /** Even light of the dome, on a level surface. [W/m²] */
  domeWm2: number
  /** Brightening (or, negative, darkening) of the horizon, on an upright surface. [W/m²] */
  horizonWm2: number
}

/** What the sky models need to know of the sky at one instant. Zenith is the apparent one. */
export interface SkyLight {
  dniWm2: number
  dhiWm2: number
  extraWm2: number
  cosZenith: number
  apparentZenithRad: number
  airMass: number
}

/** Below this the sun's height no longer divides: 1° of elevation, as commonly implemented. */
const HAY_DAVIES_MIN_COS_ZENITH = 0.01745
/** Lower bound b of the same division in Perez et al. 1990: cos 85°. */
const PEREZ_MIN_COS_ZENITH = Math.cos((85 * Math.PI) / 180)
/** Zenith weight of the sky's clearness, for zenith in radians (Perez et al. 1990). */
const PEREZ_KAPPA = 1.041

const PEREZ_CLEARNESS_EDGES = [1.065, 1.23, 1.5, 1.95, 2.8, 4.5, 6.2]
/** F11 F12 F13 F21 F22 F23 per clearness bin: Perez et al. 1990, table 6, all sites composite. */
const PEREZ_COEFFICIENTS = [
  [-0.008, 0.588, -0.062, -0.06, 0.072, -0.022],
  [0.13, 0.683, -0.151, -0.019, 0.066, -0.029],
  [0.33, 0.487, -0.221, 0.055, -0.064, -0.026],
  [0.568, 0.187, -0.295, 0.109, -0.152, -0.014],
  [0.873, -0.392, -0.362, 0.226, -0.462, 0.001],
  [1.132, -1.237, -0.412, 0.288, -0.823, 0.056],
  [1.06, -1.6, -0.359, 0.264, -1.127, 0.131],
  [0.678, -0.327, -0.25, 0.156, -1.377, 0.251],
]

/**
 * Splits the diffuse light by Hay and Davies: a share as large as the beam's transmittance comes from around the sun.
 *
 * Any sky; no horizon band. Zero diffuse light gives zero shares.
 *
 * @param sky  light at one instant
 * @param out  shares, overwritten
 * @source Hay & Davies 1980, Calculation of the solar radiation incident on an inclined surface
 */
export function hayDavies(sky: SkyLight, out: SkyShares): void {
  const anisotropy = sky.dniWm2 / sky.extraWm2
  out.aroundSunWm2 = (sky.dhiWm2 * anisotropy) / Math.max(sky.cosZenith, HAY_DAVIES_MIN_COS_ZENITH)
  out.domeWm2 = sky.dhiWm2 * (1 - anisotropy)
  out.horizonWm2 = 0
}

/**
 * Splits the diffuse light by Perez 1990, with the coefficients of all sites together.
 *
 * Any sky; a plane's sum can fall below zero and is then taken as zero (`skyOnPlaneWm2`).
 *
 * @param sky  light at one instant
 * @param out  shares, overwritten
 * @source Perez, Ineichen, Seals, Michalsky & Stewart 1990, Modeling daylight availability and irradiance components
 *   from direct and global irradiance, eq. 1, 2, 9 and table 6
 */
export function perez(sky: SkyLight, out: SkyShares): void {
  out.aroundSunWm2 = 0
  out.domeWm2 = 0
  out.horizonWm2 = 0
  const D = sky.dhiWm2
  if (!(D > 0)) return
  const z = sky.apparentZenithRad
  const kz3 = PEREZ_KAPPA * z * z * z
  const clearness = ((D + sky.dniWm2) / D + kz3) / (1 + kz3)
  let bin = 0
  while (bin < 7 && clearness >= PEREZ_CLEARNESS_EDGES[bin]) bin++
  const f = PEREZ_COEFFICIENTS[bin]
  const brightness = (D * sky.airMass) / sky.extraWm2
  const F1 = Math.max(0, f[0] + f[1] * brightness + f[2] * z)
  out.aroundSunWm2 = (D * F1) / Math.max(sky.cosZenith, PEREZ_MIN_COS_ZENITH)
  out.domeWm2 = D * (1 - F1)
  out.horizonWm2 = D * (f[3] + f[4] * brightness + f[5] * z)
}

/** Diffuse sky light on a plane from its shares, never below zero. [W/m²] */
export function skyOnPlaneWm2(shares: SkyShares, cosIncidence: number, cosTilt: number): number {
  const sum =
    shares.aroundSunWm2 * Math.max(cosIncidence, 0) +
    shares.domeWm2 * 0.5 * (1 + cosTilt) +
    shares.horizonWm2 * sinOf(cosTilt)
  return Math.max(sum, 0)
}

/** Sky light on a plane by Hay and Davies, from `hayDavies` and `skyOnPlaneWm2`. [W/m²] */
export function hayDaviesWm2(sky: SkyLight, cosIncidence: number, cosTilt: number): number {
  const shares = { aroundSunWm2: 0, domeWm2: 0, horizonWm2: 0 }
  hayDavies(sky, shares)
  return skyOnPlaneWm2(shares, cosIncidence, cosTilt)
}

/** Sky light on a plane by Perez 1990, from `perez` and `skyOnPlaneWm2`. [W/m²] */
export function perezWm2(sky: SkyLight, cosIncidence: number, cosTilt: number): number {
  const shares = { aroundSunWm2: 0, domeWm2: 0, horizonWm2: 0 }
  perez(sky, shares)
  return skyOnPlaneWm2(shares, cosIncidence, cosTilt)
}

/**
 * Light that even ground throws on a plane.
 *
 * @param ghiWm2   global light on level ground. [W/m²]
 * @param albedo   share thrown back, 0..1
 * @param cosTilt  cosine of the plane's tilt from level
 * @source Liu & Jordan 1963, The long-term average performance of flat-plate solar energy collectors
 */
export const groundWm2 = (ghiWm2: number, albedo: number, cosTilt: number): number =>
  ghiWm2 * albedo * 0.5 * (1 - cosTilt)

/** Sine of an angle between 0 and 180° from its cosine. */
export const sinOf = (cos: number): number => Math.sqrt(Math.max(0, (1 - cos) * (1 + cos)))

/**
 * Normal of a panel on the car, pointing away from its lit side: east, north, up; length 1.
 *
 * In the car's frame (forward, right, up) it is (sin p, cos p·sin r, cos p·cos r): pitch tips it forward, roll to the
 * right. A climbing grade tips the car's forward axis up; the road has no bank.
 *
 * @param pitchRad    panel's pitch on the car, −π/2..π/2. [rad]
 * @param rollRad     panel's roll on the car. [rad]
 * @param headingRad  car's heading, clockwise from true north. [rad]
 * @param gradeRad    road's angle, climbing positive. [rad]
 * @source worked by hand from the frames named above
 */
export function panelNormal(
  pitchRad: number,
  rollRad: number,
  headingRad: number,
  gradeRad: number,
): [east: number, north: number, up: number] {
  const forward = Math.sin(pitchRad)
  const right = Math.cos(pitchRad) * Math.sin(rollRad)
  const up = Math.cos(pitchRad) * Math.cos(rollRad)
  const along = forward * Math.cos(gradeRad) - up * Math.sin(gradeRad)
  const sinH = Math.sin(headingRad)
  const cosH = Math.cos(headingRad)
  return [
    along * sinH + right * cosH,
    along * cosH - right * sinH,
    forward * Math.sin(gradeRad) + up * Math.cos(gradeRad),
  ]
}
