import { airDensityKgM3 } from './air.ts'
import type { CoastFit } from './coast-down.ts'
import type { CoastCar } from './coast-down-trace.ts'

/** Air to which road loads are brought, so that they compare. @source SAE J2263 (abstract): 20 °C, 98.21 kPa, calm */
export const REFERENCE_C = 20
export const REFERENCE_PA = 98_210

/** Density of the reference air, dry: 1.167 kg/m³, as 40 CFR 1066.310 rounds it 1.17. [kg/m³] */
export const REFERENCE_KG_M3 = airDensityKgM3(REFERENCE_PA, REFERENCE_C, 0)

/** Resistance F0 + F1·v + F2·v² on a level road in calm reference air, and standard errors. */
export interface ReferenceLoad {
  F0: number
  F0Sd: number
  F1: number
  F2: number
  F2Sd: number
}

/**
 * Road load of a fitted car in reference air: rolling by the tyres' temperature, drag by the reference's density, no wind.
 *
 * @param tyreFactor rolling at the reference's temperature over rolling on the day; see road.ts
 * @returns F0 [N], F1 [N·s/m], F2 [N·s²/m²]
 * @source road-load force of 40 CFR 1066.310; reference air of SAE J2263
 */
export function referenceLoad(car: CoastCar, fit: CoastFit, tyreFactor: number): ReferenceLoad {
  const weightN = car.massKg * car.gravity * tyreFactor
  const half = 0.5 * REFERENCE_KG_M3
  return {
    F0: weightN * fit.rollingCoefficient.value,
    F0Sd: weightN * fit.rollingCoefficient.sd,
    F1: weightN * fit.linearPerMps,
    F2: half * fit.dragAreaM2.value,
    F2Sd: half * fit.dragAreaM2.sd,
  }
}

/** What a steady wind adds to the mean of both directions: ½ρCdA·w², which would pass for rolling. [N] */
export const windBiasN = (car: CoastCar, dragAreaM2: number, windMps: number): number =>
  0.5 * car.densityKgM3 * dragAreaM2 * windMps * windMps
