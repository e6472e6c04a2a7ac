import { z } from 'zod'

const number = (meaning: string) => z.number().describe(meaning)

const estimate = (meaning: string) =>
  z
    .strictObject({
      value: number('as found'),
      sd: number('standard error'),
      low: number('start of the interval that holds it 95 times in 100'),
      high: number('its end'),
    })
    .describe(meaning)

const source = z
  .enum(['measured', 'stated', 'found'])
  .describe('a column of the runs, one figure for the test, or found from both ways')

const column = (meaning: string) => z.array(z.number()).describe(meaning)

/** What a coast-down test tells of a car. */
export const coastDownDocument = z
  .strictObject({
    car: z
      .strictObject({ id: z.string(), version: z.int().describe('version that was read'), name: z.string() })
      .nullable()
      .describe('the stored car of the test'),
    massKg: number('mass that was reckoned with [kg]'),
    rotatingFactor: number('equivalent mass over mass'),
    densityKgM3: number('density of the air at the test [kg/m³]'),
    temperatureC: z
      .number()
      .nullable()
      .describe('air temperature at the test; null where only the density was given [°C]'),
    rollingCoefficient: estimate('rolling resistance coefficient'),
    dragAreaM2: estimate('drag area CdA [m²]'),
    rollingPerKmh: estimate('linear term of the rolling coefficient [h/km]').extend({
      isHeld: z.boolean().describe('whether it was held, not found'),
    }),
    correlation: number('of rolling coefficient and drag area, −1 to 1: how far one may stand in for the other'),
    wind: z
      .strictObject({
        source,
        alongMps: number('against the runs there, positive [m/s]'),
        alongSdMps: number('its standard error; 0 where it was not found [m/s]'),
        acrossMps: z.number().nullable().describe('mean size of the crosswind; null where it was not measured [m/s]'),
        biasN: number('½ρCdA·w²: what the mean of both ways would have taken for rolling [N]'),
        biasPct: number('the same in per cent of the rolling force [%]'),
      })
      .describe('wind at the car'),
    grade: z
      .strictObject({
        source,
        pct: number('up on the way there, mean of the rows [%]'),
        sdPct: number('its standard error; 0 where it was not found [%]'),
      })
      .describe('slope of the road'),
    noise: z
      .strictObject({
        kmh: number('standard deviation of a logged speed about the fit [km/h]'),
        rows: z.int().describe('rows of all runs'),
        independentRows: number('rows that they count as'),
        lagOneCorrelation: number('correlation of neighbouring residuals, −1 to 1'),
        isWhite: z.boolean().describe('whether rows err independently; if not, the intervals are widened'),
      })
      .describe('what the fit leaves unexplained'),
    reference: z
      .strictObject({
        temperatureC: number('reference temperature [°C]'),
        pressureHpa: number('reference pressure [hPa]'),
        densityKgM3: number('density of the reference air [kg/m³]'),
        rollingFactor: number('rolling at the reference temperature over rolling on the day'),
        F0N: number('resistance at rest [N]'),
        F0SdN: number('its standard error [N]'),
        F1NPerKmh: number('resistance for each km/h [N/(km/h)]'),
        F2NPerKmh2: number('resistance for each (km/h)² [N/(km/h)²]'),
        F2SdNPerKmh2: number('its standard error [N/(km/h)²]'),
        holding: z
          .array(
            z.strictObject({
              speedKmh: number('speed [km/h]'),
              forceN: number('force at the wheels [N]'),
              powerW: number('power at the wheels [W]'),
            }),
          )
          .describe('what holds a speed'),
      })
      .describe('road load on a level road in calm reference air (SAE J2263)'),
    runs: z.array(
      z.strictObject({
        name: z.string(),
        direction: z.enum(['there', 'back']),
        rows: z.int(),
        fromKmh: number('first speed [km/h]'),
        toKmh: number('last speed [km/h]'),
        timeS: column('time since the start of the run; at most 300 rows, with every outlier [s]'),
        measuredKmh: column('speed as logged [km/h]'),
        fittedKmh: column('speed as fitted [km/h]'),
        residualKmh: column('logged less fitted [km/h]'),
      }),
    ),
    warnings: z.array(z.string()).describe('what should be known before the figures are used'),
  })
  .meta({ title: 'Coast-down result' })

export type CoastDownDocument = z.output<typeof coastDownDocument>
