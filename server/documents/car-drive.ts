import { z } from 'zod'
import { count, quantity } from './quantity.ts'

/** Losses of a motor with permanent magnets and its controller, by torque and speed. */
const terms = z.strictObject({
  controllerW: quantity(0, 500, 'each controller at rest already [W]').default(0),
  frictionNm: quantity(0, 50, 'torque of hysteresis and bearings, per motor [N·m]').default(0),
  eddyNmPerKrpm: quantity(0, 50, 'torque of eddy currents and air per 1000 rpm, per motor [N·m]').default(0),
  phaseOhm: quantity(0, 10, 'resistance of one phase at 20 °C, winding and controller [Ω]'),
  torqueNmPerA: quantity(0.001, 100, 'torque per ampere of phase current, r.m.s. [N·m/A]'),
  windingC: quantity(-40, 200, 'temperature that the winding is taken to have [°C]').default(60),
})

/** Efficiencies measured on a bench, motor and controller together. */
const map = z
  .strictObject({
    speedRpm: z
      .array(quantity(1, 30_000, 'speed of the motor, ascending [rpm]'))
      .min(2)
      .max(60),
    torqueNm: z
      .array(quantity(0.01, 5000, 'torque of one motor, ascending [N·m]'))
      .min(2)
      .max(60),
    efficiencyPct: z
      .array(z.array(quantity(1, 100, 'efficiency, bus to shaft [%]')))
      .describe('one row per torque, one value per speed [%]'),
  })
  .superRefine(({ speedRpm, torqueNm, efficiencyPct }, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    for (const [name, axis] of Object.entries({ speedRpm, torqueNm }))
      axis.forEach((value, i) => {
        if (i > 0 && value <= axis[i - 1]) issue([name, i], `more than the one before (${axis[i - 1]})`, value)
      })
    if (efficiencyPct.length !== torqueNm.length)
      issue(['efficiencyPct'], `as many rows as torqueNm (${torqueNm.length})`, efficiencyPct.length)
    efficiencyPct.forEach((row, i) => {
      if (row.length !== speedRpm.length)
        issue(['efficiencyPct', i], `as many values as speedRpm (${speedRpm.length})`, row.length)
    })
  })

/** Motor and controller. */
export const drive = z
  .strictObject({
    efficiencyPct: quantity(10, 100, 'motor and controller, bus to wheel, where no losses or map are given [%]'),
    regenerationPct: quantity(
      0,
      100,
      'wheel to bus when braking with the motor, where no losses or map are given [%]',
    ).default(0),
    motorMaxW: quantity(50, 200_000, 'highest power at the wheels [W]'),
    motorMaxNm: quantity(1, 5000, 'highest torque at the wheels together [N·m]'),
    motorMaxRpm: quantity(10, 30_000, 'highest speed of the motor; left out: none [rpm]').optional(),
    wheelRadiusM: quantity(0.1, 1, 'rolling radius [m]'),
    motors: count(1, 8, 'motors that share the torque').default(1),
    gearRatio: quantity(0.1, 50, 'turns of the motor per turn of the wheel').default(1),
    regenerationMaxW: quantity(0, 200_000, 'highest braking power of the motor at the wheels [W]').default(0),
    regenerationMaxNm: quantity(
      0,
      5000,
      'highest braking torque of the motor at the wheels; left out: motorMaxNm [N·m]',
    ).optional(),
    regenerationFromKmh: quantity(0, 100, 'speed below which the motor does not brake [km/h]').default(0),
    regenerationBusMaxW: quantity(0, 200_000, 'highest power from braking at the bus; left out: none [W]').optional(),
    accelerationMps2: quantity(
      0.05,
      5,
      'acceleration that the driver keeps to, as far as the motor pulls [m/s²]',
    ).default(0.6),
    brakingMps2: quantity(0.1, 8, 'deceleration that the driver keeps to [m/s²]').default(1),
    losses: terms.optional().describe('losses by torque and speed, in place of the efficiencies'),
    map: map.optional().describe('efficiency by torque and speed, in place of the efficiencies'),
  })
  .refine((d) => d.losses === undefined || d.map === undefined, {
    path: ['map'],
    error: 'either losses or map, not both',
  })

export type DriveDocument = z.output<typeof drive>
