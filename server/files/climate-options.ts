import { z } from 'zod'
import { date, instant, label } from '../documents/quantity.ts'

/** Longest span taken from a typical year. [days] */
const MOST_DAYS = 60
const DAY_MS = 86_400_000

/** What a person says about a file of a typical year: which days of the race it shall stand for. */
export const climateOptions = z
  .strictObject({
    name: label('name of the sky').optional(),
    from: date('first day wanted, in the year of the race; the file’s own years do not matter'),
    to: date('last day wanted'),
    issuedAt: instant('when the file was read; the start of the first day where left out').optional(),
  })
  .superRefine(({ from, to }, context) => {
    const days = (Date.parse(to) - Date.parse(from)) / DAY_MS + 1
    const issue = (message: string) => context.addIssue({ code: 'custom', path: ['to'], message, input: to })
    if (days < 1) issue(`not before from (${from})`)
    if (days > MOST_DAYS) issue(`at most ${MOST_DAYS} days from from (${from})`)
  })
  .meta({ title: 'Typical year options' })

export type ClimateOptions = z.input<typeof climateOptions>
