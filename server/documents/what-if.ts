import { z } from 'zod'
import { planRequest } from './plan-request.ts'
import { label, quantity } from './quantity.ts'

/** What is taken to be otherwise; what is left out stays. */
export const changeDocument = z
  .strictObject({
    sunPct: quantity(1, 150, 'sun, of what is forecast [%]').optional(),
    headwindMps: quantity(-15, 15, 'added to the headwind at the car, all along the road [m/s]').optional(),
    massKg: quantity(-200, 500, 'added to the mass [kg]').optional(),
    dragAreaPct: quantity(50, 200, 'drag area, of the car’s [%]').optional(),
    rollingPct: quantity(50, 200, 'rolling coefficient, of the car’s [%]').optional(),
    openingPct: quantity(-100, 100, 'added to the charge at the start [% of charge]').optional(),
    stopMinutes: quantity(-60, 180, 'added to each stop of the day [min]').optional(),
    reservePct: quantity(0, 100, 'reserve in place of the car’s [% of charge]').optional(),
    targetPct: quantity(0, 100, 'charge wanted at the close in place of the day’s [% of charge]').optional(),
    closePct: quantity(-100, 100, 'added to the charge wanted at the close [% of charge]').optional(),
    trackerOff: label('name of a tracker that gives nothing').optional(),
  })
  .meta({ title: 'Change' })

export type ChangeDocument = z.output<typeof changeDocument>

/** A day to plan and what might be otherwise. */
export const whatIfRequest = planRequest
  .omit({ objective: true, spreads: true, promisePct: true, members: true, seed: true })
  .extend({
    variants: z
      .array(z.strictObject({ name: label('name for people'), change: changeDocument }))
      .min(1)
      .max(24),
  })
  .meta({ title: 'What-if request' })

export type WhatIfRequest = z.output<typeof whatIfRequest>

const arrival = z.string().describe('arrival at the end of the day’s stages (ISO 8601, local offset)')

/** Quick answers, each approximate. */
export const whatIfDocument = z
  .strictObject({
    date: z.string(),
    zone: z.string(),
    base: z
      .strictObject({ arriveAt: arrival, closingWh: z.number().describe('battery when the day closes [Wh]') })
      .nullable()
      .describe('the best plan without any change; null where there is none'),
    text: z.string().describe('one sentence on the base'),
    variants: z.array(
      z.strictObject({
        name: z.string(),
        holds: z.boolean().describe('whether speeds near the base’s keep reserve, target and hours'),
        laterMin: z.number().nullable().describe('later than the base; negative is earlier [min]'),
        arriveAt: arrival.nullable(),
        closingWh: z.number().nullable().describe('battery when the day closes [Wh]'),
        lacksWh: z.number().describe('what is missing of reserve or target at least, where it does not hold [Wh]'),
      }),
    ),
    method: z.string().describe('how the variants were found'),
  })
  .meta({ title: 'What-if' })

export type WhatIfDocument = z.output<typeof whatIfDocument>
