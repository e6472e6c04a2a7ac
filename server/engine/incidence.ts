import { sinOf } from './plane.ts'

/** Surface of the cells' cover: which law says how much slanting light is lost. */
export type IncidenceLaw = 'none' | 'physical' | 'ashrae' | 'martin-ruiz'

/** Refractive index of glass, extinction per metre and thickness: De Soto, Klein & Beckman 2006. */
const GLASS = { index: 1.526, extinctionPerM: 4, thicknessM: 0.002 }
/** Slope of the ASHRAE law: the usual value for flat glass (Souka & Safwat 1966). */
const ASHRAE_B0 = 0.05
/** Angular loss coefficient of clean glass: Martin & Ruiz 2001, table 1. */
const MARTIN_RUIZ_AR = 0.16
/** First diffuse fitting parameter, 4/(3π): Martin & Ruiz 2001, 2013. */
const MARTIN_RUIZ_C1 = 0.4244

/**
 * Share of a beam that passes a glass cover, over the share that passes head-on, by Fresnel, Snell and Bouguer.
 *
 * @param cosIncidence  cosine of the angle between beam and plane's normal; from behind gives 0
 * @source De Soto, Klein & Beckman 2006, Improvement and validation of a model for photovoltaic array performance, eq. 14–15
 */
export function iamPhysical(cosIncidence: number): number {
  if (!(cosIncidence > 0)) return 0
  const { index: n, extinctionPerM, thicknessM } = GLASS
  const c = Math.min(cosIncidence, 1)
  const cosInside = Math.sqrt(1 - (1 - c * c) / (n * n))
  const square = (c - n * cosInside) / (c + n * cosInside)
  const parallel = (n * c - cosInside) / (n * c + cosInside)
  const headOn = ((n - 1) / (n + 1)) ** 2
  const KL = extinctionPerM * thicknessM
  const passed = Math.exp(-KL / cosInside) * (1 - 0.5 * (square * square + parallel * parallel))
  return passed / (Math.exp(-KL) * (1 - headOn))
}

/**
 * Share of a beam kept by the ASHRAE law 1 − b0·(1/cos θ − 1), never below 0.
 *
 * @param cosIncidence  cosine of the angle between beam and plane's normal; from behind gives 0
 * @source Souka & Safwat 1966; ASHRAE standard 93-77
 */
export const iamAshrae = (cosIncidence: number): number =>
  cosIncidence > 0 ? Math.max(0, 1 - ASHRAE_B0 * (1 / Math.min(cosIncidence, 1) - 1)) : 0

/**
 * Share of a beam kept by Martin and Ruiz, clean glass.
 *
 * @param cosIncidence  cosine of the angle between beam and plane's normal; from behind gives 0
 * @source Martin & Ruiz 2001, Calculation of the PV modules angular losses under field conditions by means of an
 *   analytical model, eq. 4
 */
export const iamMartinRuiz = (cosIncidence: number): number =>
  cosIncidence > 0 ? Math.expm1(-Math.min(cosIncidence, 1) / MARTIN_RUIZ_AR) / Math.expm1(-1 / MARTIN_RUIZ_AR) : 0

const diffuseShare = (t: number): number =>
  -Math.expm1(-(MARTIN_RUIZ_C1 * t + (0.5 * MARTIN_RUIZ_AR - 0.154) * t * t) / MARTIN_RUIZ_AR)

/**
 * Share of even sky light that a clean glass cover keeps on a plane.
 *
 * @param cosTilt  cosine of the plane's tilt from level, 1..−1
 * @source Martin & Ruiz 2001, eq. 5a, with c2 = ar/2 − 0.154 of Martin & Ruiz 2013 (corrigendum)
 */
export function martinRuizSky(cosTilt: number): number {
  const sin = sinOf(cosTilt)
  const tilt = Math.atan2(sin, cosTilt)
  return cosTilt <= -1 + 1e-12 ? 0 : diffuseShare(sin + (Math.PI - tilt - sin) / (1 + cosTilt))
}

/**
 * Share of the ground's light that a clean glass cover keeps on a plane; a level plane sees none and gets 0.
 *
 * @param cosTilt  cosine of the plane's tilt from level, 1..−1
 * @source Martin & Ruiz 2001, eq. 5b, with c2 as in `martinRuizSky`
 */
export function martinRuizGround(cosTilt: number): number {
  const sin = sinOf(cosTilt)
  const tilt = Math.atan2(sin, cosTilt)
  return cosTilt >= 1 - 1e-12 ? 0 : diffuseShare(sin + (tilt - sin) / (1 - cosTilt))
}

const LAWS = {
  none: (cos: number): number => (cos > 0 ? 1 : 0),
  physical: iamPhysical,
  ashrae: iamAshrae,
  'martin-ruiz': iamMartinRuiz,
}

/** Share of a beam kept by the named law. */
export const beamShare = (law: IncidenceLaw, cosIncidence: number): number => LAWS[law](cosIncidence)

/** Steps of a law's table over cos θ from 0 to 1: linear between them, wrong by at most 1e-7 of the light (physical). */
export const INCIDENCE_STEPS = 8192

/** A law as a table over cos θ in equal steps from 0 to 1, for `beamShareAt`; one step is added as a rail. */
export function incidenceTable(law: IncidenceLaw): Float64Array {
  const table = Float64Array.from({ length: INCIDENCE_STEPS + 2 }, (_, i) =>
    beamShare(law, Math.min(1, i / INCIDENCE_STEPS)),
  )
  table[0] = law === 'none' ? 1 : table[0]
  return table
}

/** Share of a beam kept, read from a law's table; 0 < cosIncidence ≤ 1. */
export function beamShareAt(table: Float64Array, cosIncidence: number): number {
  const at = cosIncidence * INCIDENCE_STEPS
  const i = at | 0
  return table[i] + (table[i + 1] - table[i]) * (at - i)
}
