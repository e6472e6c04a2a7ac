import { z } from 'zod'
import { label, quantity } from './quantity.ts'

const benchPoint = z.strictObject({
  inputV: quantity(1, 1000, 'input voltage [V]'),
  outputV: quantity(1, 1000, 'output voltage [V]'),
  inputW: quantity(0.1, 20_000, 'input power [W]'),
  efficiencyPct: quantity(1, 100, 'output over input power [%]'),
  spreadPct: quantity(0, 20, 'standard uncertainty of the efficiency [points]').default(0.5),
})

const lossTerms = z.strictObject({
  standingW: quantity(0, 200, 'loss with no load [W]'),
  switchingPct: quantity(0, 20, 'loss per input current × output voltage [%]'),
  conductionOhm: quantity(0, 5, 'loss per input current squared [Ω]'),
  rectifierV: quantity(0, 5, 'loss per output current [V]'),
})

/** A boost tracker: its window and what it loses. */
export const tracker = z
  .strictObject({
    name: label('name of the tracker'),
    window: z.strictObject({
      inputMinV: quantity(0, 1000, 'lowest input voltage [V]'),
      inputMaxV: quantity(1, 1000, 'highest input voltage [V]'),
      inputMaxA: quantity(0.1, 200, 'highest input current [A]'),
      outputMaxV: quantity(1, 1000, 'highest output voltage [V]'),
      outputMinV: quantity(0, 1000, 'lowest output voltage [V]').default(0),
      outputMaxA: quantity(0.1, 200, 'highest output current [A]').optional(),
      maxW: quantity(1, 20_000, 'highest input power [W]'),
    }),
    trackingPct: quantity(50, 100, 'share of the best power that the tracker finds [%]').default(99.5),
    losses: lossTerms.optional(),
    lossesSpreadPct: quantity(
      1,
      200,
      'standard uncertainty of each of the losses given; 25 when left out [%]',
    ).optional(),
    bench: z.array(benchPoint).min(4).max(500).optional(),
  })
  .superRefine((t, context) => {
    const issue = (path: string[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    if ((t.losses === undefined) === (t.bench === undefined))
      issue(['losses'], 'either losses or bench, exactly one of the two', t.losses === undefined ? 'neither' : 'both')
    if (t.window.inputMaxV <= t.window.inputMinV)
      issue(['window', 'inputMaxV'], `more than inputMinV (${t.window.inputMinV})`, t.window.inputMaxV)
    if (t.window.outputMaxV <= t.window.outputMinV)
      issue(['window', 'outputMaxV'], `more than outputMinV (${t.window.outputMinV})`, t.window.outputMaxV)
  })

/** An instrument that trackers are read with. */
export const meter = z.strictObject({
  name: label('name of the meter'),
  measures: z.enum(['V', 'A']).describe('volts or amps'),
  accuracyPct: quantity(
    0.01,
    20,
    'its class: what it shows is right within this share, anywhere in it evenly likely [%]',
  ),
})
