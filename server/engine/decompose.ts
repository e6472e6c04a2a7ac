import type { Irradiance } from './clear-sky.ts'

/** Beyond this true zenith angle Erbs' beam is taken as none. [cosine] */
const COS_87_DEG = Math.cos((87 * Math.PI) / 180)
/** Floor of the cosine of the zenith angle in the clearness index. */
const COS_FLOOR = 0.065

/**
 * Diffuse share of the global irradiance by clearness index 0..1.
 *
 * @source Erbs, Klein & Duffie 1982, Solar Energy 28, 293, eq. 1
 */
export function erbsDiffuseShare(clearness: number): number {
  if (clearness <= 0.22) return 1 - 0.09 * clearness
  if (clearness > 0.8) return 0.165
  const k = clearness
  return 0.9511 + k * (-0.1604 + k * (4.388 + k * (-16.638 + k * 12.336)))
}

/** Diffuse irradiance by Erbs from global irradiance and the cosine of the TRUE zenith angle. [W/m²] */
export function erbsDiffuseWm2(ghiWm2: number, cosTrueZenith: number, extraWm2: number): number {
  if (cosTrueZenith < COS_87_DEG) return ghiWm2
  const clearness = Math.min(ghiWm2 / (extraWm2 * Math.max(cosTrueZenith, COS_FLOOR)), 1)
  return ghiWm2 * erbsDiffuseShare(clearness)
}

/**
 * Beam and diffuse from global irradiance alone; all of it diffuse beyond 87° zenith.
 *
 * Made from hourly means; clear sky of high, clean air comes out more diffuse than it is.
 *
 * @param ghiWm2         global horizontal irradiance. [W/m²]
 * @param trueZenithRad  zenith angle without refraction. [rad]
 * @param extraWm2       irradiance above the air, facing the sun. [W/m²]
 * @source Erbs, Klein & Duffie 1982, Solar Energy 28, 293
 */
export function erbs(ghiWm2: number, trueZenithRad: number, extraWm2: number): { dni: number; dhi: number } {
  const ghi = Math.max(ghiWm2, 0)
  const cosZenith = Math.cos(trueZenithRad)
  const dhi = erbsDiffuseWm2(ghi, cosZenith, extraWm2)
  return { dni: dhi < ghi ? (ghi - dhi) / cosZenith : 0, dhi }
}

/**
 * Share of the clear sky's global irradiance that comes through a cloud cover of 0..1.
 *
 * @source Kasten & Czeplak 1980, Solar Energy 24, 177, eq. 4
 */
export const cloudTransmission = (cloudFraction: number): number => 1 - 0.75 * cloudFraction ** 3.4

/**
 * Irradiance under clouds: global by Kasten–Czeplak; cloud 0 is the clear sky itself, its diffuse included.
 *
 * The diffuse share runs from the clear sky's own to 1 with the square of the cover. That rule is ours, after the
 * published share 0.3 + 0.7 N², whose cloudless end does not fit a turbidity model.
 *
 * @param clear          irradiance without clouds. [W/m²]
 * @param cloudFraction  cover 0..1
 * @source Kasten & Czeplak 1980, Solar Energy 24, 177 (global); diffuse share: stated here
 */
export function cloudySky(clear: Irradiance, cloudFraction: number): Irradiance {
  const through = cloudTransmission(cloudFraction)
  const scattered = cloudFraction * cloudFraction
  return {
    ghi: through * clear.ghi,
    dni: through * (1 - scattered) * clear.dni,
    dhi: through * (clear.dhi + scattered * (clear.ghi - clear.dhi)),
  }
}
