import { z } from 'zod'
import { dayBudgetDocument } from './budget.ts'
import { campDocument } from './here.ts'
import { speedsDocument } from './speeds.ts'

const wh = (meaning: string) => z.number().describe(`${meaning} [Wh]`)
const at = (meaning: string) => z.string().describe(`${meaning} (ISO 8601, local offset)`)
const min = (meaning: string) => z.number().describe(`${meaning} [min]`)
const km = (meaning: string) => z.number().describe(`${meaning} [km from where the day starts]`)
const range = z
  .strictObject({ p10: z.number(), p50: z.number(), p90: z.number() })
  .describe('what nine, five and one of ten members reach at least')

const gateRange = z.strictObject({
  name: z.string().describe('place'),
  km: km('where'),
  at: at('when the plan is there'),
  plannedWh: wh('battery by the plan'),
  wh: range.describe('battery over the members [Wh]'),
})

const ranges = z.strictObject({
  members: z.number().describe('days drawn'),
  seed: z.number(),
  closingWh: range.describe('battery at the close [Wh]'),
  harvestWh: range.describe('came in on the road [Wh]'),
  lateMin: range.describe(
    'how much later than planned it would be to arrive and still close as wanted, by the price of energy; negative is earlier [min]',
  ),
  touchesReservePct: z.number().describe('members that touch the reserve on the road [%]'),
  touchesMostKm: km('where most of those come lowest').nullable(),
  missesTargetPct: z.number().describe('members that close below the target [%]'),
  gates: z.array(gateRange),
  causes: z
    .array(z.strictObject({ cause: z.string(), label: z.string(), sharePct: z.number() }))
    .describe('what the spread of the closing balance comes from, largest first: what to measure next [%]'),
})

const choice = z.strictObject({
  speeds: speedsDocument,
  arriveAt: at('arrival at the end of the day’s stages'),
  drivingMin: min('from setting off to that arrival, stops included'),
  closingWh: wh('battery when the day closes'),
  closingPct: z.number().describe('the same as charge [% of charge]'),
  leastSpareWh: wh('least battery over the reserve'),
})

/** A plan for one day: the best speeds, speeds for people, how good they are and how sure. */
export const planDocument = z
  .strictObject({
    engineVersion: z.string(),
    race: z.string(),
    car: z.string(),
    date: z.string(),
    zone: z.string(),
    assumptions: z.array(z.string()),
    outcome: z.strictObject({
      kind: z
        .enum(['planned', 'furthest', 'impossible', 'parked'])
        .describe('furthest: the day’s road is not finished, and no plan comes further'),
      text: z.string().describe('one sentence that can be read aloud'),
    }),
    camp: z
      .strictObject({
        until: campDocument.describe('for forecasts at these speeds'),
        km: km('where the car is parked'),
        leftKm: z.number().describe('from there to the end of the day’s stages [km]'),
        goesOn: z.boolean().describe('whether another day of the race follows'),
      })
      .nullable()
      .describe('where a day ends that does not finish its road'),
    target: z.strictObject({ wh: wh('wanted at the close'), chargePct: z.number() }),
    best: choice.nullable().describe('earliest arrival, one speed for each kilometre or so'),
    forPeople: choice
      .extend({
        sections: z.array(
          z.strictObject({
            stage: z.string(),
            fromKm: km('start'),
            toKm: km('end'),
            speedKmh: z.number().describe('whole km/h; limits inside it are kept'),
          }),
        ),
        costMin: min('later than the best'),
        budget: dayBudgetDocument.describe('the day at these speeds'),
      })
      .nullable()
      .describe('the same in sections of 10 to 20 km and whole km/h'),
    constant: z
      .strictObject({ speedKmh: z.number(), arriveAt: at('arrival'), laterMin: min('later than the best') })
      .nullable()
      .describe('the fastest constant speed that meets the target, for comparison'),
    bound: z
      .strictObject({
        arriveAt: at('no plan of one speed a piece arrives earlier, by the tables of the best plan'),
        withinMin: min('how far the best plan is from it'),
      })
      .nullable(),
    prices: z
      .array(
        z.strictObject({
          km: km('where'),
          sPerWh: z.number().describe('time that a watt-hour more there saves [s/Wh]'),
        }),
      )
      .describe('price of energy along the road'),
    limits: z
      .array(
        z.strictObject({
          what: z.enum(['limits', 'reserve', 'target']),
          label: z.string(),
          costMin: min('earlier without it'),
        }),
      )
      .describe('what each want costs: how much earlier the best plan would arrive without it'),
    ranges: ranges.nullable(),
    steady: z
      .strictObject({
        promisePct: z.number().describe('members that may touch the reserve [%]'),
        touchesPct: z.number().describe('fresh members that do [%]'),
        costMin: min('later than the best'),
        arriveAt: at('arrival'),
        speeds: speedsDocument,
      })
      .nullable()
      .describe('a plan that touches the reserve no more often than promised'),
    impossible: z
      .strictObject({
        why: z.enum(['hours', 'reserve', 'target']),
        reachedKm: km(
          'how far the car comes: where a plan goes furthest the end of that, else about how far hours and reserve reach',
        ),
        mostAtCloseWh: wh('most that the day can close with').nullable(),
        nearest: z
          .array(z.strictObject({ what: z.enum(['target', 'reserve', 'later']), text: z.string(), value: z.number() }))
          .describe(
            'what would have to give, one at a time: target or reserve [% of charge], later end of driving [min]',
          ),
      })
      .nullable(),
  })
  .meta({ title: 'Plan' })

export type PlanDocument = z.output<typeof planDocument>
