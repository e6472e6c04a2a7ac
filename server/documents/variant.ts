import { z } from 'zod'
import { mergePatch } from './merge-patch.ts'
import { planRequest } from './plan-request.ts'
import { label, quantity, timeOfDay } from './quantity.ts'
import { speedsDocument } from './speeds.ts'
import { changeDocument } from './what-if.ts'

/** Most variants in one order. */
export const MOST_VARIANTS = 12

/** What a variant may change by a number; all but the last two are answered quickly by a what-if too. */
export const variantChange = changeDocument
  .extend({
    trackerLossPct: quantity(0, 500, 'what the trackers lose, of what they do [%]').optional(),
    byTime: timeOfDay(
      'when the driving must end, local time of the day, within its driving hours, in place of the base’s',
    ).optional(),
  })
  .meta({ title: 'Variant change' })

export type VariantChange = z.output<typeof variantChange>

/** A day as it might be otherwise: documents, numbers, speeds. */
export const variantDocument = z
  .strictObject({
    name: label('name for people'),
    car: mergePatch('car').optional(),
    race: mergePatch('race').optional(),
    sky: mergePatch('sky').optional(),
    change: variantChange.optional(),
    speeds: speedsDocument
      .refine(({ kind }) => kind !== 'meet-target', {
        path: ['kind'],
        error: '"constant", "legs" or "sections"; without speeds the variant is planned',
      })
      .describe('speeds to hold; left out, the variant is planned anew')
      .optional(),
  })
  .meta({ title: 'Variant' })

export type VariantDocument = z.output<typeof variantDocument>

export const variantList = z
  .array(variantDocument)
  .min(1)
  .max(MOST_VARIANTS)
  .superRefine((variants, context) => {
    variants.forEach(({ name }, i) => {
      if (variants.findIndex((other) => other.name === name) < i)
        context.addIssue({ code: 'custom', path: [i, 'name'], message: 'a name used once', input: name })
    })
  })

/** A day to plan and the variants to plan beside it. */
export const variantsRequest = planRequest
  .omit({ objective: true, promisePct: true })
  .extend({ variants: variantList })
  .meta({ title: 'Variants request' })

const wh = (meaning: string) => z.number().describe(`${meaning} [Wh]`)
const at = (meaning: string) => z.string().describe(`${meaning} (ISO 8601, local offset)`)
const pct = (meaning: string) => z.number().describe(`${meaning} [%]`)

const figures = z.strictObject({
  arriveAt: at('arrival at the end of the day’s stages, at speeds for people'),
  bestArriveAt: at('the same with one speed for each kilometre or so; as above where speeds were given'),
  drivingMin: z.number().describe('from setting off to the arrival, stops included [min]'),
  closingWh: wh('battery when the day closes'),
  closingPct: z.number().describe('the same as charge [% of charge]'),
  overTargetWh: wh('closing balance over what is wanted at the close'),
  leastSpareWh: wh('least battery over the reserve'),
  touchesReservePct: pct('days drawn that touch the reserve on the road'),
  missesTargetPct: pct('days drawn that close below what is wanted'),
  speeds: speedsDocument.describe('what these figures are of, for forecasts at these speeds'),
})

export type VariantFigures = z.output<typeof figures>

const outcome = z.strictObject({
  kind: z
    .enum(['planned', 'forecast', 'impossible', 'parked'])
    .describe('forecast: at speeds that were given; impossible: the day’s road is not finished as wanted'),
  text: z.string().describe('one sentence that can be read aloud'),
})

const energyCause = z.strictObject({
  id: z.string().describe('line of the ledger'),
  label: z.string().describe('the line for people'),
  wh: wh('what it adds to the closing balance; negative takes'),
})

export type EnergyCause = z.output<typeof energyCause>

const arrivalCause = z.strictObject({
  id: z.string().describe('what was changed'),
  label: z.string().describe('the change for people'),
  min: z.number().describe('how much later it makes the arrival; negative is earlier [min]'),
})

export type ArrivalCause = z.output<typeof arrivalCause>

const atBaseSpeeds = z.strictObject({
  finishes: z.boolean().describe('whether the day’s road is finished'),
  arriveAt: at('arrival, or where the day’s driving ends'),
  closingWh: wh('battery when the day closes'),
  leastSpareWh: wh('least battery over the reserve; negative is below it'),
  causes: z.array(energyCause).describe('closing balance less the base’s, line by line: they add up to it'),
})

export const variantAnswer = z
  .strictObject({
    name: z.string(),
    outcome,
    assumptions: z.array(z.string()).describe('what is assumed beyond the base'),
    figures: figures.nullable(),
    laterMin: z.number().nullable().describe('later than the base; negative is earlier [min]'),
    arrivalCauses: z
      .array(arrivalCause)
      .nullable()
      .describe('the same by what was changed, one after the other in this order, each planned in full: they add up'),
    energyCauses: z
      .array(energyCause)
      .nullable()
      .describe('closing balance less the base’s at the speeds of each, by line of the ledger: they add up'),
    atBaseSpeeds: atBaseSpeeds
      .nullable()
      .describe('the changed day at the base’s speeds; null where those do not fit its road'),
  })
  .meta({ title: 'Variant answer' })

export type VariantAnswer = z.output<typeof variantAnswer>

export const variantBase = z.strictObject({
  outcome,
  figures: figures.nullable().describe('the base as planned; null where it cannot be'),
})

/** Variants in full, beside their base. */
export const variantsDocument = z
  .strictObject({
    engineVersion: z.string(),
    race: z.string(),
    car: z.string(),
    date: z.string(),
    zone: z.string(),
    members: z.number().describe('days drawn, the same for base and variants'),
    seed: z.number(),
    base: variantBase,
    variants: z.array(variantAnswer),
  })
  .meta({ title: 'Variants' })

export type VariantsDocument = z.output<typeof variantsDocument>
