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

const derating = z
  .strictObject({
    fullToC: quantity(-40, 150, 'case temperature up to which it takes all its power [°C]'),
    leastFromC: quantity(-40, 200, 'case temperature from which only leastPct is left; even in between [°C]'),
    leastPct: quantity(0, 100, 'share of maxW that is left then [%]').default(0),
    parkedCPerW: quantity(0, 50, 'case over air for each watt lost, standing [°C/W]').default(2),
    movingCPerW: quantity(0, 50, 'the same while driving [°C/W]').default(1),
  })
  .describe('power that a hot case takes; left out: none')

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
      leastRiseV: quantity(0, 100, 'least that the output lies above the input [V]').default(0),
    }),
    trackingPct: quantity(50, 100, 'share of the best power that the tracker finds [%]').default(99.5),
    losses: lossTerms.optional(),
    lossesSpreadPct: quantity(
      1,
      200,
      'standard uncertainty of each of the losses given; 25 when left out [%]',
    ).optional(),
    bench: z.array(benchPoint).min(4).max(500).optional(),
    benchUse: z
      .enum(['fit', 'table'])
      .describe('losses by four terms fitted to the bench, or by the bench points themselves')
      .default('fit'),
    derating: derating.optional(),
    standbyW: quantity(0, 20, 'drawn from the pack while it takes nothing from its string [W]').default(0),
    isDead: z.boolean().describe('broken or taken out of the circuit').default(false),
  })
  .superRefine((t, context) => {
    const issue = (path: string[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    if ((t.losses === undefined) === (t.bench === undefined))
      issue(['losses'], 'either losses or bench, exactly one of the two', t.losses === undefined ? 'neither' : 'both')
    if (t.benchUse === 'table' && t.bench === undefined)
      issue(['benchUse'], '"fit" where there is no bench', t.benchUse)
    if (t.derating !== undefined && t.derating.leastFromC <= t.derating.fullToC)
      issue(['derating', 'leastFromC'], `more than fullToC (${t.derating.fullToC})`, t.derating.leastFromC)
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
