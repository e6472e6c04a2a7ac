import { z } from 'zod'
import { count, date, quantity, slug } from './quantity.ts'

const speedKmh = quantity(5, 200, 'held speed, where limits and the motor allow it [km/h]')

/** The speeds to try: one for all, one per leg, one per section, or the fastest that meets the day's target. */
export const speedsDocument = z
  .discriminatedUnion('kind', [
    z.strictObject({ kind: z.literal('constant'), speedKmh }),
    z.strictObject({
      kind: z.literal('legs'),
      speedKmh: speedKmh.describe('held speed on legs that are not listed [km/h]'),
      legs: z
        .array(z.strictObject({ stage: slug('stage'), date: date('day of the leg').optional(), speedKmh }))
        .min(1)
        .max(500),
    }),
    z.strictObject({
      kind: z.literal('sections'),
      speedKmh: speedKmh.describe('held speed outside the sections [km/h]'),
      sections: z
        .array(
          z
            .strictObject({
              stage: slug('stage'),
              fromKm: quantity(0, 50_000, 'start, from the start of the stage [km]'),
              toKm: quantity(0, 50_000, 'end, from the start of the stage [km]'),
              speedKmh,
            })
            .refine((s) => s.toKm > s.fromKm, { path: ['toKm'], error: 'more than fromKm' }),
        )
        .min(1)
        .max(5000),
    }),
    z
      .strictObject({
        kind: z.literal('meet-target'),
        lowestKmh: count(5, 200, 'lowest speed to try [km/h]').default(30),
        highestKmh: count(5, 200, 'highest speed to try [km/h]').default(130),
      })
      .refine((s) => s.highestKmh >= s.lowestKmh, { path: ['highestKmh'], error: 'at least lowestKmh' }),
  ])
  .meta({ title: 'Speeds' })

export type SpeedsDocument = z.output<typeof speedsDocument>
export type SpeedsInput = z.input<typeof speedsDocument>
