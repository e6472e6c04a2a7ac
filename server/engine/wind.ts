import { InputError } from './input-error.ts'

/** Height at which weather services state the wind. [M] */
const STATED_HEIGHT_M = 10

/**
 * Wind along the road against the car: positive slows it.
 *
 * @param windMps     wind speed at the car. [m/s]
 * @param windFromRad direction the wind comes FROM, clockwise from true north
 * @param headingRad  direction the car goes to, clockwise from true north
 * @returns [m/s]
 */
export const headwindMps = (windMps: number, windFromRad: number, headingRad: number): number =>
  windMps * Math.cos(windFromRad - headingRad)

/**
 * Wind across the road: positive comes from the right.
 *
 * @param windMps     wind speed at the car. [m/s]
 * @param windFromRad direction the wind comes FROM, clockwise from true north
 * @param headingRad  direction the car goes to, clockwise from true north
 * @returns [m/s]
 */
export const crosswindMps = (windMps: number, windFromRad: number, headingRad: number): number =>
  windMps * Math.sin(windFromRad - headingRad)

/**
 * Wind at the car's height over the wind stated at 10 m: the logarithmic profile of neutral air.
 *
 * An estimate: half a metre is inside the roughness layer, and hedges, cuttings and traffic are not
 * in it. Ask once and multiply each step's wind.
 *
 * @param roughnessM roughness length of the land around: 0.005 bare and flat, 0.03 grass, 0.1 crops. [m]
 * @param carHeightM height at which the car meets the wind, above roughnessM up to 10. [m]
 * @returns 0..1
 * @throws InputError when a length is out of range
 * @source logarithmic law of the wall, u(z)/u(10) = ln(z/z0)/ln(10/z0) (from memory)
 */
export function windShareAtCar(roughnessM: number, carHeightM: number): number {
  if (!(roughnessM > 0 && roughnessM < STATED_HEIGHT_M)) {
    throw new InputError('out-of-range', 'roughnessM', `${roughnessM} given, above 0 and below 10 expected`)
  }
  if (!(carHeightM > roughnessM && carHeightM <= STATED_HEIGHT_M)) {
    throw new InputError('out-of-range', 'carHeightM', `${carHeightM} given, above ${roughnessM} up to 10 expected`)
  }
  return Math.log(carHeightM / roughnessM) / Math.log(STATED_HEIGHT_M / roughnessM)
}

/**
 * Wind at the car's height from the wind stated at 10 m, by windShareAtCar.
 *
 * @param wind10mMps wind at 10 m. [m/s]
 * @param roughnessM roughness length of the land around. [m]
 * @param carHeightM height at which the car meets the wind. [m]
 * @returns [m/s]
 */
export const windAtCarMps = (wind10mMps: number, roughnessM: number, carHeightM: number): number =>
  wind10mMps * windShareAtCar(roughnessM, carHeightM)
