import { z } from 'zod'
import { instant, label, quantity } from './quantity.ts'

const volts = (where: string) => quantity(0.1, 1000, `voltage at its ${where} [V]`)
const amps = (where: string) => quantity(0.001, 200, `current at its ${where} [A]`)
const meter = (what: string) => label(`meter of the car that showed the ${what}; left out: one of the usual class`)

/** Four numbers that somebody read off a tracker. */
export const readingDocument = z
  .strictObject({
    id: z.uuid({ error: 'a UUID' }).describe('made by whoever sends it, so that a repeat is harmless'),
    tracker: label('name of the tracker'),
    at: instant('when it was read'),
    inputV: volts('input'),
    inputA: amps('input'),
    outputV: volts('output'),
    outputA: amps('output'),
    meters: z
      .strictObject({
        inputV: meter('input voltage').optional(),
        inputA: meter('input current').optional(),
        outputV: meter('output voltage').optional(),
        outputA: meter('output current').optional(),
      })
      .optional(),
    note: label('what the crew wants to remember').optional(),
  })
  .meta({ title: 'Reading' })

export type ReadingDocument = z.output<typeof readingDocument>

/** The four numbers of a reading, as fields. */
export const READING_FIELDS = ['inputV', 'inputA', 'outputV', 'outputA'] as const
export type ReadingField = (typeof READING_FIELDS)[number]
