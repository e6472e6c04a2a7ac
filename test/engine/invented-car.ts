import type { Drive } from '../../server/engine/drive.ts'
import { type Going, type RoadLoad, STANDARD_GRAVITY } from '../../server/engine/road.ts'

/** An invented car of 250 kg, 0.10 m², rolling 0.0035, 96 % from bus to road; with 30 W of auxiliaries in the sums. */
export const LOAD: RoadLoad = {
  massKg: 250,
  rotatingFactor: 1.03,
  dragAreaM2: 0.1,
  rollingCoefficient: 0.0035,
  rollingPerMps: 0,
  gravity: STANDARD_GRAVITY,
}

export const DRIVE: Drive = {
  efficiency: 0.96,
  regenEfficiency: 0.8,
  motorMaxW: 5000,
  motorMaxN: 400,
  regenMaxW: 1500,
}

/** Level road, still air of 1.17 kg/m³. */
export const LEVEL: Going = { gradeRad: 0, surfaceFactor: 1, headwindMps: 0, crosswindMps: 0, densityKgM3: 1.17 }
