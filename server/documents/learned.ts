import { z } from 'zod'
import { quantity } from './quantity.ts'

/** Losses of a tracker as its readings show them. */
const learnedTerms = z.strictObject({
  standingW: quantity(0, 1e5, 'loss with no load [W]'),
  switchingFraction: quantity(0, 100, 'loss per input current × output voltage'),
  conductionOhm: quantity(0, 1e5, 'loss per input current squared [Ω]'),
  rectifierV: quantity(0, 1e5, 'loss per output current [V]'),
})

/** Losses by the tracker's name, in place of those of the car. */
export const learnedLosses = z.record(z.string().min(1).max(80), learnedTerms)

export type LearnedLosses = z.output<typeof learnedLosses>
