const DEG = 180 / Math.PI

/** Irradiance by parts: on the level ground, beam facing the sun, diffuse on the level ground. [W/m²] */
export interface Irradiance {
  ghi: number
  dni: number
  dhi: number
}

/**
 * Length of the sun's way through the air over that of an overhead sun, at sea-level pressure.
 *
 * @param apparentZenithRad  refracted zenith angle; beyond 90° the value at the horizon is given. [rad]
 * @source Kasten & Young 1989, Applied Optics 28, 4735
 */
export function relativeAirMass(apparentZenithRad: number): number {
  const zenithDeg = Math.min(apparentZenithRad * DEG, 90)
  return 1 / (Math.cos(zenithDeg / DEG) + 0.50572 * (96.07995 - zenithDeg) ** -1.6364)
}

/** Air mass at the local pressure. */
export const absoluteAirMass = (relative: number, pressurePa: number): number => (relative * pressurePa) / 101_325

/**
 * Irradiance under a cloudless sky; nothing once the apparent sun is below the horizon.
 *
 * Ineichen–Perez without the enhancement factor for high air mass; beam is the smaller of the direct form and the
 * limit from the global irradiance. Linke turbidity 1..10 at air mass 2, heights 0..4,000 m.
 *
 * @param of.apparentZenithRad  refracted zenith angle. [rad]
 * @param of.airMass            absolute air mass (at local pressure)
 * @param of.linke              Linke turbidity
 * @param of.altM               height over the sea. [m]
 * @param of.extraWm2           irradiance above the air, facing the sun. [W/m²]
 * @source Ineichen & Perez 2002, Solar Energy 73, 151, and its correction in Solar Energy 73, 307
 */
export function clearSkyWm2(of: {
  apparentZenithRad: number
  airMass: number
  linke: number
  altM: number
  extraWm2: number
}): Irradiance {
  const cosZenith = Math.cos(of.apparentZenithRad)
  if (!(cosZenith > 0)) return { ghi: 0, dni: 0, dhi: 0 }
  const { airMass, linke, altM, extraWm2 } = of
  const fh1 = Math.exp(-altM / 8000)
  const fh2 = Math.exp(-altM / 1250)
  const cg1 = 5.09e-5 * altM + 0.868
  const cg2 = 3.92e-5 * altM + 0.0387
  const ghi = cg1 * extraWm2 * cosZenith * Math.exp(-cg2 * airMass * (fh1 + fh2 * (linke - 1)))
  const direct = extraWm2 * (0.664 + 0.163 / fh1) * Math.exp(-0.09 * airMass * (linke - 1))
  const limit = (ghi * Math.max(1 - (0.1 - 0.2 * Math.exp(-linke)) / (0.1 + 0.882 / fh1), 0)) / cosZenith
  const dni = Math.min(direct, limit)
  return { ghi, dni, dhi: ghi - dni * cosZenith }
}
