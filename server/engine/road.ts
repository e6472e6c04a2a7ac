import { InputError } from './input-error.ts'

/** What the car's body and wheels ask of the road. */
export interface RoadLoad {
  /** Mass with crew. */
  massKg: number
  /** Equivalent mass over mass: what turns counts too, about 1.03. */
  rotatingFactor: number
  dragAreaM2: number
  /** Rolling force over weight on the reference surface, at rest. */
  rollingCoefficient: number
  /** Added to the rolling coefficient for each m/s. */
  rollingPerMps: number
  /** Acceleration of gravity, m/s². */
  gravity: number
}

/** Road and air that the car goes through: one piece of the route at one time. */
export interface Going {
  gradeRad: number
  /** Rolling on this surface over rolling on the reference surface. */
  surfaceFactor: number
  /** At the car's height, against it positive. */
  headwindMps: number
  crosswindMps: number
  densityKgM3: number
}

/** Standard acceleration of gravity, m/s². @source BIPM, The International System of Units, CGPM 1901 */
export const STANDARD_GRAVITY = 9.80665

/**
 * A road load that the force functions can rely on.
 *
 * @throws InputError naming the field when a number is missing or out of range
 */
export function prepareRoadLoad(load: RoadLoad): RoadLoad {
  const check = (name: keyof RoadLoad, least: number): void => {
    if (load[name] >= least && load[name] < Infinity) return
    throw new InputError('out-of-range', `load.${name}`, `${load[name]} given, a number of at least ${least} expected`)
  }
  check('massKg', 1)
  check('rotatingFactor', 1)
  check('dragAreaM2', 0)
  check('rollingCoefficient', 0)
  check('rollingPerMps', 0)
  check('gravity', 1)
  return { ...load }
}

/**
 * Force that rolling takes on a road of this slope.
 *
 * @param speedMps      at least 0. [m/s]
 * @param gradeRad      slope, up positive
 * @param surfaceFactor rolling on this surface over the reference surface
 * @returns [N]
 * @source F = m·g·cos θ·(c0 + c1·v)·factor; linear speed term as in SAE J2452 class models (common practice)
 */
export const rollingN = (load: RoadLoad, speedMps: number, gradeRad: number, surfaceFactor: number): number =>
  load.massKg *
  load.gravity *
  Math.cos(gradeRad) *
  (load.rollingCoefficient + load.rollingPerMps * speedMps) *
  surfaceFactor

/**
 * Force of the air along the road, negative when the wind pushes.
 *
 * The relative wind's full length, crosswind included, times its part along the road. The drag area
 * is that of air from straight ahead; what a sidewind adds to it is not modelled.
 *
 * @param speedMps     over the ground. [m/s]
 * @param headwindMps  at the car, against it positive. [m/s]
 * @param crosswindMps at the car, either sign. [m/s]
 * @param densityKgM3  of the air. [kg/m³]
 * @returns [N]
 * @source F = ½·ρ·CdA·|v_rel|·v_along (common practice)
 */
export function dragN(
  load: RoadLoad,
  speedMps: number,
  headwindMps: number,
  crosswindMps: number,
  densityKgM3: number,
): number {
  const along = speedMps + headwindMps
  return 0.5 * densityKgM3 * load.dragAreaM2 * Math.sqrt(along * along + crosswindMps * crosswindMps) * along
}

/**
 * Force that the slope takes, negative downhill.
 *
 * @param gradeRad slope, up positive
 * @returns [N]
 */
export const climbingN = (load: RoadLoad, gradeRad: number): number => load.massKg * load.gravity * Math.sin(gradeRad)

/**
 * Force at the wheels that holds a speed: rolling, air and slope together, negative when the road drives the car.
 *
 * @param speedMps at least 0. [m/s]
 * @returns [N]
 */
export const holdingN = (load: RoadLoad, speedMps: number, going: Going): number =>
  rollingN(load, speedMps, going.gradeRad, going.surfaceFactor) +
  dragN(load, speedMps, going.headwindMps, going.crosswindMps, going.densityKgM3) +
  climbingN(load, going.gradeRad)

/**
 * Energy of the moving car, its turning parts included.
 *
 * @param speedMps over the ground. [m/s]
 * @returns [J]
 */
export const kineticJ = (load: RoadLoad, speedMps: number): number =>
  0.5 * load.massKg * load.rotatingFactor * speedMps * speedMps
