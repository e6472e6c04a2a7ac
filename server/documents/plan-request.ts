import { z } from 'zod'
import { forecastRequest } from './forecast.ts'
import { count, date, quantity, timeOfDay } from './quantity.ts'

/** Standard deviations of what may differ from the forecast; what is left out is assumed. */
export const spreadsDocument = z
  .strictObject({
    sunDayPct: quantity(0, 50, 'of a factor on the sun that holds all day: a forecast that is off [%]').default(3),
    sunWanderPct: quantity(
      0,
      100,
      'of a factor on the sun that wanders: clouds; left out: by the sky’s lead time and clearness [%]',
    ).optional(),
    wanderMin: quantity(5, 1440, 'time over which that factor forgets [min]').default(90),
    wanderKm: quantity(1, 2000, 'way over which it forgets [km]').default(150),
    linke: quantity(
      0,
      3,
      'of the Linke turbidity, all day; counts where no irradiance is given: there the sky says the light itself',
    ).default(0.5),
    airC: quantity(0, 10, 'of the air’s temperature, all day [°C]').default(1.5),
    headwindMps: quantity(0, 10, 'of the headwind at the car, all day [m/s]').default(0.8),
    roadPct: quantity(0, 30, 'of a factor on what road and air take [%]').default(3),
    trackersPct: quantity(0, 20, 'of a factor on what the trackers let through [%]').default(0.5),
    trackerLossPct: quantity(0, 100, 'of a factor on what a tracker loses, each for itself [%]').default(15),
    openingPct: quantity(0, 20, 'of the charge at the start [% of charge]').default(1),
  })
  .meta({ title: 'Spreads' })

/** A day to plan: the documents of a forecast, the date, and how sure it must be. */
export const planRequest = forecastRequest
  .omit({ speeds: true })
  .extend({
    date: date('the day to plan'),
    targetPct: quantity(0, 100, 'charge wanted when the day closes, in place of the race’s [% of charge]').optional(),
    spreads: spreadsDocument.default(spreadsDocument.parse({})),
    objective: z
      .enum(['earliest', 'furthest'])
      .describe('the earliest arrival at the end of the day’s stages, or the longest way')
      .default('earliest'),
    byTime: timeOfDay(
      'when the driving must end, local time of the day, within its driving hours; left out: with them',
    ).optional(),
    promisePct: quantity(0.5, 50, 'share of the days drawn that a steady plan may touch the reserve on [%]').default(5),
    members: count(50, 5000, 'days drawn for the ranges; fewer than 2,000 are for a quick look').default(2000),
    seed: count(0, 2_147_483_647, 'where the drawing starts; the same seed gives the same days').default(1),
  })
  .meta({ title: 'Plan request' })

export type PlanRequest = z.output<typeof planRequest>
