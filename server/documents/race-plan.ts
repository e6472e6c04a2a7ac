import { z } from 'zod'
import { campDocument } from './here.ts'
import { planDocument } from './plan.ts'
import { speedsDocument } from './speeds.ts'

const wh = (meaning: string) => z.number().describe(`${meaning} [Wh]`)
const at = (meaning: string) => z.string().describe(`${meaning} (ISO 8601, local offset)`)
const min = (meaning: string) => z.number().describe(`${meaning} [min]`)
const price = (meaning: string) => z.number().describe(`${meaning} [s/Wh]`).nullable()

const battery = z.strictObject({ wh: wh('usable energy'), chargePct: z.number().describe('charge [% of charge]') })
const range = z
  .strictObject({ p10: z.number(), p50: z.number(), p90: z.number() })
  .describe('what nine, five and one of ten members reach at least')

const ranges = z.strictObject({
  members: z.number().describe('days drawn'),
  closingWh: range.describe('battery at the close [Wh]'),
  lateMin: range.describe(
    'later than planned it would be to arrive and still close as wanted; negative is earlier [min]',
  ),
  touchesReservePct: z.number().describe('members that touch the reserve on the road [%]'),
})

const close = z.strictObject({
  kind: z
    .enum(['found', 'race', 'order', 'reserve'])
    .describe(
      'found: free, and found by the plan; race, order: given by the race or by this order; reserve: the last day, free',
    ),
  wanted: battery.describe('wanted when the day closes'),
  closing: battery.nullable().describe('what the plan for people closes with; null where the day is not planned'),
  costMin: min(
    'how much longer the days around it take with this charge given than with it free; each night counted alone',
  ).nullable(),
  freePct: z.number().describe('charge that would be found if it were free [% of charge]').nullable(),
  eveningSPerWh: price('time that a watt-hour more on the last kilometre of the day saves'),
  morningSPerWh: price('time that a watt-hour more at the start of the next driving day saves'),
  text: z.string().describe('what this charge does, in plain words'),
})

const road = z.strictObject({
  setOffAt: at('when the driving starts'),
  arriveAt: at('when it ends, at the speeds for people'),
  drivingMin: min('from setting off to that arrival, stops included'),
  bestMin: min('the same at the best speeds, one for each kilometre or so'),
  bestArriveAt: at('arrival at those'),
  withinMin: min('how far the best is from the proven bound of this day').nullable(),
  keepsAll: z.boolean().describe('whether the best speeds keep reserve, stops and closing charge'),
  km: z.number().describe('driven [km]'),
  leastSpareWh: wh('least battery over the reserve, at the speeds for people'),
  speeds: speedsDocument.describe('speeds for people'),
  sections: planDocument.shape.forPeople.unwrap().shape.sections,
})

const day = z.strictObject({
  date: z.string(),
  zone: z.string(),
  utcOffsetMin: z.number().describe('of the day’s clock [min]'),
  state: z
    .enum(['driven', 'camp', 'parked', 'impossible', 'waiting'])
    .describe(
      'camp: its road is not finished; parked: nothing is driven; impossible: no plan was found; waiting: a day before it is impossible',
    ),
  text: z.string().describe('one sentence that can be read aloud'),
  from: z.string().describe('place where the day starts'),
  to: z.string().describe('place where it ends'),
  opening: battery.nullable().describe('when the day opens'),
  road: road.nullable(),
  camp: z
    .strictObject({
      until: campDocument.describe('for forecasts at these speeds'),
      leftKm: z.number().describe('from there to the end of the day’s stages [km]'),
    })
    .nullable(),
  close,
  ranges: ranges.nullable().describe('of the day alone, opened as planned'),
  impossible: planDocument.shape.impossible,
  series: z
    .strictObject({
      atMs: z.array(z.number()).describe('[ms, UTC]'),
      wh: z.array(z.number()).describe('battery then, at the speeds for people [Wh]'),
    })
    .nullable()
    .describe('battery through the day, thinned for a chart'),
  drives: z.array(z.strictObject({ fromMs: z.number(), toMs: z.number() })).describe('[ms, UTC]'),
})

/** A plan for the days of a race together. */
export const racePlanDocument = z
  .strictObject({
    engineVersion: z.string(),
    race: z.string(),
    car: z.string(),
    zone: z.string(),
    assumptions: z.array(z.string()),
    outcome: z.strictObject({
      kind: z
        .enum(['planned', 'unfinished', 'impossible'])
        .describe('unfinished: the last planned day ends before its road does; impossible: a day could not be planned'),
      text: z.string().describe('one sentence that can be read aloud'),
    }),
    drivingMin: min('of all days at the speeds for people, stops included'),
    bestMin: min('of all days at the best speeds, stops included'),
    capacityWh: wh('usable energy of a full pack'),
    reserve: battery,
    days: z.array(day),
  })
  .meta({ title: 'Race plan' })

export type RacePlanDocument = z.output<typeof racePlanDocument>
export type RacePlanDay = RacePlanDocument['days'][number]
