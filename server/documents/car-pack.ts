import { z } from 'zod'
import { chargeAtV } from '../engine/ocv-table.ts'
import { count, quantity } from './quantity.ts'

/** Rows of the voltage table closer together than this would be a jump. [%] */
const LEAST_STEP_PCT = 0.01

/** A pack of which less is usable is taken for a mistake. [%] */
const LEAST_USABLE_PCT = 10

const temperature = (meaning: string) => quantity(-60, 120, `${meaning} [°C]`)

/** Defaults are what data sheets of lithium-ion cells commonly say: charge at 0–45 °C, discharge at −20–60 °C. */
const temperatures = (act: string, minC: number, maxC: number) =>
  z
    .strictObject({
      minC: temperature(`no ${act} below`).default(minC),
      fullFromC: temperature(
        `the whole ${act} current from; less between minC and here; left out: from minC`,
      ).optional(),
      fullToC: temperature(`the whole ${act} current up to; less between here and maxC; left out: to maxC`).optional(),
      maxC: temperature(`no ${act} above`).default(maxC),
    })
    .superRefine((t, context) => {
      const order = [t.minC, t.fullFromC ?? t.minC, t.fullToC ?? t.maxC, t.maxC]
      if (order.some((value, i) => i > 0 && value < order[i - 1]))
        context.addIssue({
          code: 'custom',
          path: [],
          message: `minC, fullFromC, fullToC and maxC ascending; they are ${order.join(', ')}`,
          input: t,
        })
    })

const ohmFactors = z
  .strictObject({
    tempsC: z
      .array(quantity(-40, 90, 'temperature of a column [°C]'))
      .min(1)
      .max(20),
    rows: z
      .array(
        z.strictObject({
          chargePct: quantity(0, 100, 'charge of the cell [%]'),
          factors: z
            .array(quantity(0.05, 50, 'factor on cellOhm'))
            .min(1)
            .max(20),
        }),
      )
      .min(1)
      .max(50),
  })
  .superRefine(({ tempsC, rows }, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    tempsC.forEach((t, i) => {
      if (i > 0 && t <= tempsC[i - 1]) issue(['tempsC', i], `more than the one before (${tempsC[i - 1]})`, t)
    })
    rows.forEach((row, i) => {
      if (i > 0 && row.chargePct <= rows[i - 1].chargePct)
        issue(['rows', i, 'chargePct'], `more than the row before (${rows[i - 1].chargePct})`, row.chargePct)
      if (row.factors.length !== tempsC.length)
        issue(['rows', i, 'factors'], `${tempsC.length} factors, one for each of tempsC`, row.factors)
    })
  })

const weakestCell = z.strictObject({
  capacityDeficitPct: quantity(0, 60, 'what its capacity lacks of the others’ [%]').default(0),
  chargeOffsetPct: quantity(
    -40,
    40,
    'how far its charge lies below the others’ when they are full, of their capacity; below 0: above them [%]',
  ).default(0),
  extraResistancePct: quantity(0, 500, 'what its resistance has more than the others’ [%]').default(0),
})

const heat = z.strictObject({
  capacityKjPerC: quantity(0.1, 1000, 'heat that warms the pack by one degree; about 1 kJ/°C for each kg [kJ/°C]'),
  lossMovingWPerC: quantity(0, 1000, 'heat given to the air per degree above it while the car moves [W/°C]'),
  lossParkedWPerC: quantity(0, 1000, 'heat given to the air per degree above it while the car stands [W/°C]'),
})

/** The pack by one of its cells. */
export const pack = z
  .strictObject({
    seriesCells: count(1, 500, 'cells in series'),
    parallelCells: count(1, 500, 'cells in parallel'),
    cellAh: quantity(0.1, 500, 'capacity of one cell [Ah]'),
    cellOcv: z
      .array(
        z.strictObject({
          chargePct: quantity(0, 100, 'charge of the cell [%]'),
          restingV: quantity(0.5, 5, 'rested voltage of one cell [V]'),
        }),
      )
      .min(2)
      .max(200)
      .describe('rested cell voltage by charge, from 0 to 100 %'),
    cellOhm: quantity(1e-5, 1, 'resistance of one cell where its factor is 1 [Ω]'),
    ohmFactors: ohmFactors
      .optional()
      .describe(
        'factors on cellOhm by charge and temperature; left out: 1 everywhere, as cells differ too much to guess',
      ),
    leadsOhm: quantity(0, 1, 'resistance of leads and contactors [Ω]').default(0),
    cellMaxV: quantity(0.5, 5, 'highest cell voltage [V]'),
    cellMinV: quantity(0.1, 5, 'lowest cell voltage; a rested cell at it is empty [V]'),
    cellChargeMaxA: quantity(0.01, 500, 'highest charging current of one cell [A]'),
    cellDischargeMaxA: quantity(0.01, 1000, 'highest discharging current of one cell [A]'),
    chargeTemps: temperatures('charging', 0, 45)
      .prefault({})
      .describe('cell temperatures at which it may charge; the defaults are common for lithium-ion'),
    dischargeTemps: temperatures('discharging', -20, 60)
      .prefault({})
      .describe('cell temperatures at which it may discharge; the defaults are common for lithium-ion'),
    coulombicPct: quantity(80, 100, 'charge stored over charge put in [%]').default(99.5),
    weakestCell: weakestCell
      .optional()
      .describe('the group in series that departs most from the others; left out: all alike'),
    heat: heat.optional().describe('how it warms by its own losses; left out: it is as warm as the air'),
    reservePct: quantity(0, 90, 'charge that the crew will not go below, of the usable charge [%]'),
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
    if (p.weakestCell !== undefined && p.seriesCells < 2)
      issue(['weakestCell'], 'left out where there is one cell in series', p.weakestCell)
    checkUsable(p, issue)
  })

interface UsableFields {
  cellOcv: { chargePct: number; restingV: number }[]
  cellMinV: number
  weakestCell?: { capacityDeficitPct: number; chargeOffsetPct: number }
}

/** Enough must stay between the floor and full, and between the first cell empty and the first full. */
function checkUsable(
  { cellOcv, cellMinV, weakestCell }: UsableFields,
  issue: (path: (string | number)[], message: string, input: unknown) => void,
): void {
  const charge = Float64Array.from(cellOcv, (row) => row.chargePct)
  if (charge.some((pct, i) => i > 0 && pct <= charge[i - 1])) return
  const floorPct = chargeAtV({ charge, V: Float64Array.from(cellOcv, (row) => row.restingV) }, cellMinV)
  const room = `at least ${LEAST_USABLE_PCT} % of the charge usable`
  if (100 - floorPct < LEAST_USABLE_PCT) return issue(['cellMinV'], `a floor that leaves ${room}`, cellMinV)
  if (weakestCell === undefined) return
  const { capacityDeficitPct: deficit, chargeOffsetPct: offset } = weakestCell
  const emptyPct = Math.max(floorPct, 100 + offset - (1 - floorPct / 100) * (100 - deficit))
  if (Math.min(100, 100 + offset) - emptyPct < LEAST_USABLE_PCT)
    issue(
      ['weakestCell'],
      `a cell that leaves ${room}; this one leaves ${(Math.min(100, 100 + offset) - emptyPct).toFixed(1)} %`,
      weakestCell,
    )
}
