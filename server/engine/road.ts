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
  /** How much of its rolling a tyre loses for each °C that it warms, 0 where left out. [1/°C] */
  rollingPerC?: number
  /** Air temperature at which `rollingCoefficient` holds, 20 where left out. [°C] */
  rollingAtC?: number
  /** What a slanting wind does to the drag area; nothing where left out. */
  yaw?: YawFactors
}

/** Drag area over that of air from straight ahead, by the angle of the relative wind; the same to both sides. */
export interface YawFactors {
  /** Ascending from 0 up to π. (rows) */
  angleRad: Float64Array
  /** Above 0. (rows) */
  factor: Float64Array
}

/** Road and air that the car goes through: one piece of the route at one time. */
export interface Going {
  gradeRad: number
  /** Rolling on this surface, at this temperature, over rolling at the load's reference. */
  surfaceFactor: number
  /** At the car's height, against it positive. */
  headwindMps: number
  crosswindMps: number
  densityKgM3: number
}

/** Standard acceleration of gravity, m/s². @source BIPM, The International System of Units, CGPM 1901 */
export const STANDARD_GRAVITY = 9.80665

type CheckedNumber = 'massKg' | 'rotatingFactor' | 'dragAreaM2' | 'rollingCoefficient' | 'rollingPerMps' | 'gravity'

/**
 * A road load that the force functions can rely on.
 *
 * @throws InputError naming the field when a number is missing or out of range
 */
export function prepareRoadLoad(load: RoadLoad): RoadLoad {
  const check = (name: CheckedNumber, least: number): void => {
    if (load[name] >= least && load[name] < Infinity) return
    throw new InputError('out-of-range', `load.${name}`, `${load[name]} given, a number of at least ${least} expected`)
  }
  check('massKg', 1)
  check('rotatingFactor', 1)
  check('dragAreaM2', 0)
  check('rollingCoefficient', 0)
  check('rollingPerMps', 0)
  check('gravity', 1)
  const { rollingPerC = 0, rollingAtC = 20, yaw } = load
  if (!(rollingPerC >= 0 && rollingPerC <= 0.1))
    throw new InputError('out-of-range', 'load.rollingPerC', `${rollingPerC} given, 0 to 0.1 expected`)
  if (!(Math.abs(rollingAtC) <= 100))
    throw new InputError('out-of-range', 'load.rollingAtC', `${rollingAtC} given, -100 to 100 expected`)
  if (yaw !== undefined) checkYaw(yaw)
  return { ...load, rollingPerC, rollingAtC, ...(yaw === undefined ? {} : { yaw }) }
}

function checkYaw({ angleRad, factor }: YawFactors): void {
  const n = angleRad.length
  if (n < 1 || factor.length !== n || angleRad[0] !== 0)
    throw new InputError(
      'bad-table',
      'load.yaw',
      `${n} angles, ${factor.length} factors given, as many from 0 up expected`,
    )
  for (let i = 0; i < n; i++) {
    const isAscending = i === 0 || (angleRad[i] > angleRad[i - 1] && angleRad[i] <= Math.PI)
    if (isAscending && factor[i] > 0 && factor[i] < Infinity) continue
    const given = `${angleRad[i]} rad, ${factor[i]} given`
    throw new InputError(
      'bad-table',
      `load.yaw[${i}]`,
      `${given}, an angle above the one before and a factor above 0 expected`,
    )
  }
}

/** Between these a tyre's rolling may move with its temperature; no tyre was measured beyond. */
const TYRE_FACTOR = { least: 0.7, most: 1.5 }

/**
 * Rolling in air of a temperature over rolling at the load's reference: warm tyres roll more easily.
 *
 * Held within 0.7 to 1.5. A tyre's own warmth, from flexing and sun, is taken to be that of the reference too.
 *
 * @param airC air at the car. [°C]
 * @source F(T) = F(T0)/(1 + K·(T − T0)); UN GTR 15 annex 4 and SAE J2263 correct so, K about 0.0086/°C (from memory)
 */
export function tyreFactor(
  { rollingPerC = 0, rollingAtC = 20 }: Pick<RoadLoad, 'rollingPerC' | 'rollingAtC'>,
  airC: number,
): number {
  const divisor = 1 + rollingPerC * (airC - rollingAtC)
  return 1 / Math.min(Math.max(divisor, 1 / TYRE_FACTOR.most), 1 / TYRE_FACTOR.least)
}

/**
 * Drag area in a relative wind from this angle over that of air from straight ahead.
 *
 * Linear between the rows, the last row's beyond them.
 *
 * @param alongMps relative wind along the car, from ahead positive. [m/s]
 * @param acrossMps relative wind across it, either sign. [m/s]
 */
export function yawFactor({ angleRad, factor }: YawFactors, alongMps: number, acrossMps: number): number {
  const angle = Math.atan2(Math.abs(acrossMps), alongMps)
  let i = 1
  while (i < angleRad.length && angleRad[i] < angle) i++
  if (i >= angleRad.length) return factor[angleRad.length - 1]
  const share = (angle - angleRad[i - 1]) / (angleRad[i] - angleRad[i - 1])
  return factor[i - 1] + share * (factor[i] - factor[i - 1])
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
 * The relative wind's full length, crosswind included, times its part along the road, times the drag area
 * in a wind from that angle.
 *
 * @param speedMps     over the ground. [m/s]
 * @param headwindMps  at the car, against it positive. [m/s]
 * @param crosswindMps at the car, either sign. [m/s]
 * @param densityKgM3  of the air. [kg/m³]
 * @returns [N]
 * @source F = ½·ρ·CdA(yaw)·|v_rel|·v_along (common practice)
 */
export function dragN(
  load: RoadLoad,
  speedMps: number,
  headwindMps: number,
  crosswindMps: number,
  densityKgM3: number,
): number {
  const along = speedMps + headwindMps
  const windMps = Math.sqrt(along * along + crosswindMps * crosswindMps)
  const areaM2 = load.yaw === undefined ? load.dragAreaM2 : load.dragAreaM2 * yawFactor(load.yaw, along, crosswindMps)
  return 0.5 * densityKgM3 * areaM2 * windMps * along
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
