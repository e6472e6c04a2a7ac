import { z } from 'zod'
import { quantity } from './quantity.ts'

/** Rows whose angles start at 0 and rise. */
function risingAngles(rows: { yawDeg: number }[], context: z.RefinementCtx): void {
  rows.forEach((row, i) => {
    const wanted = i === 0 ? '0 in the first row' : `more than the row before (${rows[i - 1].yawDeg})`
    if (i === 0 ? row.yawDeg !== 0 : row.yawDeg <= rows[i - 1].yawDeg)
      context.addIssue({ code: 'custom', path: [i, 'yawDeg'], message: wanted, input: row.yawDeg })
  })
}

/** What air and road ask of the car. */
export const body = z.strictObject({
  massKg: quantity(20, 5000, 'mass with crew and ballast [kg]'),
  rotatingFactor: quantity(1, 1.3, 'equivalent mass with turning wheels over mass').default(1.03),
  dragAreaM2: quantity(0.02, 3, 'drag area CdA [m²]'),
  rollingCoefficient: quantity(0.0005, 0.05, 'rolling resistance coefficient'),
  rollingPerKmh: quantity(0, 0.001, 'added to the coefficient per km/h [h/km]').default(0),
  rollingPctPerC: quantity(
    0,
    3,
    'rolling that a tyre loses per °C that it warms, 0.86 where a standard corrects it [%/°C]',
  ).default(0),
  rollingAtC: quantity(-20, 60, 'air temperature at which rollingCoefficient was found [°C]').default(20),
  dragByYaw: z
    .array(
      z.strictObject({
        yawDeg: quantity(0, 180, 'angle of the relative wind from straight ahead, either side [°]'),
        factor: quantity(0.2, 5, 'drag area at this angle over dragAreaM2'),
      }),
    )
    .min(2)
    .max(50)
    .superRefine((rows, context) => risingAngles(rows, context))
    .optional()
    .describe('drag area by the angle of the relative wind, from 0°; left out: the same at every angle'),
  windHeightM: quantity(0.1, 5, 'height at which the wind is felt [m]').default(0.5),
})

/** What else draws. */
export const auxiliaries = z.strictObject({
  drivingW: quantity(0, 2000, 'auxiliaries while driving [W]'),
  parkedW: quantity(0, 2000, 'auxiliaries while parked and awake [W]').default(0),
  chargingW: quantity(0, 2000, 'auxiliaries while parked with trackers at work; left out: parkedW [W]').optional(),
})
