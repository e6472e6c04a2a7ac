import { z } from 'zod'
import { quantity } from './quantity.ts'

/** Most rows around a circle: every 5°. */
const MOST_ROWS = 72

/** Rows around a circle that ascend by one of their fields, the last less than a turn beyond the first. */
const around = <T extends z.ZodType<Record<F, number>>, F extends string>(row: T, field: F) =>
  z
    .array(row)
    .min(1)
    .max(MOST_ROWS)
    .superRefine((rows, context) =>
      rows.forEach((r, i) => {
        if (i === 0) return
        const message =
          r[field] <= rows[i - 1][field]
            ? `more than the row before it (${rows[i - 1][field]})`
            : `less than a whole turn beyond the first row (${rows[0][field]})`
        if (r[field] <= rows[i - 1][field] || r[field] >= rows[0][field] + 360)
          context.addIssue({ code: 'custom', path: [i, field], message, input: r[field] })
      }),
    )

/** What stands around the parked car. */
export const horizon = around(
  z.strictObject({
    azimuthDeg: quantity(0, 360, 'direction, clockwise from true north [°]'),
    heightDeg: quantity(0, 90, 'height of trees, hills or walls there [°]'),
  }),
  'azimuthDeg',
)
  .optional()
  .describe('what hides the sun and the sky around the car, linear between rows and round the north; left out: nothing')

/** What the car takes from one of its panels. */
export const shade = around(
  z.strictObject({
    bearingDeg: quantity(0, 360, 'bearing of the sun, clockwise from the nose [°]'),
    heightDeg: quantity(0, 90, 'height of the sun over the deck under which the beam is cut [°]'),
    lostPct: quantity(0, 100, 'share of the panel’s beam that is lost then [%]'),
  }),
  'bearingDeg',
)
  .optional()
  .describe('shade of canopy and fins on the panel, linear between rows and round the nose; left out: none')

export type HorizonDocument = z.output<typeof horizon>
export type ShadeDocument = z.output<typeof shade>
