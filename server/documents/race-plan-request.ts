import { z } from 'zod'
import { forecastRequest } from './forecast.ts'
import { spreadsDocument } from './plan-request.ts'
import { count, date, quantity } from './quantity.ts'

const night = z.discriminatedUnion('kind', [
  z.strictObject({
    date: date('the day that closes so'),
    kind: z.literal('fixed'),
    chargePct: quantity(0, 100, 'charge wanted when that day closes [% of charge]'),
  }),
  z.strictObject({ date: date('the day whose closing charge is to be found'), kind: z.literal('free') }),
])

/** What is wanted of a race plan beside its documents. */
export const raceWanted = z.strictObject({
  fromDate: date('the first day to plan; left out, the first of the race, or the day of `from`').optional(),
  toDate: date('the last day to plan; left out, the last of the race').optional(),
  openingPct: quantity(
    0,
    100,
    'charge when the first planned day opens, in place of what the days before leave [% of charge]',
  ).optional(),
  nights: z
    .array(night)
    .max(40)
    .superRefine((nights, context) => {
      nights.forEach(({ date: on }, i) => {
        if (nights.findIndex((other) => other.date === on) < i)
          context.addIssue({ code: 'custom', path: [i, 'date'], message: 'a day that is named once', input: on })
      })
    })
    .describe(
      'closing charges in place of the race’s: fixed, or free to be found; a day that is not listed closes as the race says, and free where it says nothing',
    )
    .default([]),
  spreads: spreadsDocument.default(spreadsDocument.parse({})),
  members: count(50, 5000, 'days drawn for each day’s ranges; fewer than 2,000 are for a quick look').default(2000),
  seed: count(0, 2_147_483_647, 'where the drawing starts; the same seed gives the same days').default(1),
})

/** Days of a race to plan together: the documents of a forecast and what is wanted. */
export const racePlanRequest = forecastRequest
  .omit({ speeds: true, date: true, until: true })
  .extend(raceWanted.shape)
  .meta({ title: 'Race plan request' })

export type RacePlanRequest = z.output<typeof racePlanRequest>
