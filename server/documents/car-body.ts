import { z } from 'zod'
import { quantity } from './quantity.ts'

/** What air and road ask of the car. */
export const body = z.strictObject({
  massKg: quantity(20, 5000, 'mass with crew and ballast [kg]'),
  rotatingFactor: quantity(1, 1.3, 'equivalent mass with turning wheels over mass').default(1.03),
  dragAreaM2: quantity(0.02, 3, 'drag area CdA [m²]'),
  rollingCoefficient: quantity(0.0005, 0.05, 'rolling resistance coefficient'),
  rollingPerKmh: quantity(0, 0.001, 'added to the coefficient per km/h [h/km]').default(0),
  windHeightM: quantity(0.1, 5, 'height at which the wind is felt [m]').default(0.5),
})

/** Motor and controller. */
export const drive = z.strictObject({
  efficiencyPct: quantity(10, 100, 'motor and controller, bus to wheel [%]'),
  regenerationPct: quantity(0, 100, 'wheel to bus when braking with the motor [%]').default(0),
  motorMaxW: quantity(50, 200_000, 'highest power at the wheels [W]'),
  motorMaxNm: quantity(1, 5000, 'highest torque at the wheels together [N·m]'),
  wheelRadiusM: quantity(0.1, 1, 'rolling radius [m]'),
  regenerationMaxW: quantity(0, 200_000, 'highest braking power of the motor at the wheels [W]').default(0),
})

/** What else draws. */
export const auxiliaries = z.strictObject({
  drivingW: quantity(0, 2000, 'auxiliaries while driving [W]'),
  parkedW: quantity(0, 2000, 'auxiliaries while parked and awake [W]').default(0),
})
