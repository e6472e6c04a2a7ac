import { z } from 'zod'
import { count, quantity } from './quantity.ts'

/** Rows of the voltage table closer together than this would be a jump. [%] */
const LEAST_STEP_PCT = 0.01

/** The pack by one of its cells. */
export const pack = z
  .strictObject({
    seriesCells: count(1, 500, 'cells in series'),
    parallelCells: count(1, 500, 'cells in parallel'),
    cellAh: quantity(0.1, 500, 'capacity of one cell [Ah]'),
    cellOcv: z
      .array(
        z.strictObject({
          chargePct: quantity(0, 100, 'charge [%]'),
          restingV: quantity(0.5, 5, 'rested voltage of one cell [V]'),
        }),
      )
      .min(2)
      .max(200)
      .describe('rested cell voltage by charge, from 0 to 100 %'),
    cellOhm: quantity(1e-5, 1, 'resistance of one cell [Ω]'),
    leadsOhm: quantity(0, 1, 'resistance of leads and contactors [Ω]').default(0),
    cellMaxV: quantity(0.5, 5, 'highest cell voltage [V]'),
    cellMinV: quantity(0.1, 5, 'lowest cell voltage [V]'),
    cellChargeMaxA: quantity(0.01, 500, 'highest charging current of one cell [A]'),
    cellDischargeMaxA: quantity(0.01, 1000, 'highest discharging current of one cell [A]'),
    coulombicPct: quantity(80, 100, 'charge stored over charge put in [%]').default(99.5),
    reservePct: quantity(0, 90, 'charge that the crew will not go below [%]'),
  })
  .superRefine((p, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    const { cellOcv } = p
    if (cellOcv[0].chargePct !== 0) issue(['cellOcv', 0, 'chargePct'], '0 in the first row', cellOcv[0].chargePct)
    const last = cellOcv.length - 1
    if (cellOcv[last].chargePct !== 100)
      issue(['cellOcv', last, 'chargePct'], '100 in the last row', cellOcv[last].chargePct)
    for (let i = 1; i <= last; i++) {
      if (cellOcv[i].chargePct < cellOcv[i - 1].chargePct + LEAST_STEP_PCT)
        issue(
          ['cellOcv', i, 'chargePct'],
          `at least ${LEAST_STEP_PCT} more than the row before (${cellOcv[i - 1].chargePct})`,
          cellOcv[i].chargePct,
        )
      if (cellOcv[i].restingV < cellOcv[i - 1].restingV)
        issue(
          ['cellOcv', i, 'restingV'],
          `not less than the row before (${cellOcv[i - 1].restingV})`,
          cellOcv[i].restingV,
        )
    }
    if (p.cellMaxV <= p.cellMinV) issue(['cellMaxV'], `more than cellMinV (${p.cellMinV})`, p.cellMaxV)
    if (p.cellMaxV < cellOcv[last].restingV)
      issue(['cellMaxV'], `at least the rested voltage at 100 % (${cellOcv[last].restingV})`, p.cellMaxV)
  })
