import { z } from 'zod'
import { carDocument } from '../documents/car.ts'
import { date } from '../documents/quantity.ts'
import { raceDocument } from '../documents/race.ts'
import { comparisonRequest, comparisonZone } from '../documents/sky-comparison.ts'
import { compareSkies } from '../documents/sky-comparison-model.ts'
import { skyDocument } from '../documents/sky.ts'
import { InputError } from '../engine/input-error.ts'
import { Fault } from '../errors.ts'
import { meant, member, openRequest, storedReference } from './forecast-jobs.ts'
import { checked, readJson } from './read-json.ts'

const { sky: _sky, ...dayShape } = openRequest.shape
const openDay = z.strictObject({ ...dayShape, date: date('the day that the difference is wanted for') })

/** Two skies, and perhaps a day, whose documents stand in the request or are named by their ids. */
export const openComparison = z
  .strictObject({
    forecast: z.union([skyDocument, storedReference('sky')]).describe('what was expected'),
    measured: z.union([skyDocument, storedReference('sky')]).describe('what was measured; another forecast will do'),
    zone: comparisonZone.optional(),
    day: openDay.optional().describe('a day to be driven under both, for what the difference is worth'),
  })
  .meta({ title: 'Sky comparison request' })

export type OpenComparison = z.output<typeof openComparison>

/** The comparison wanted in a body, checked; documents that it only names are left as `{ id }`. */
export function readComparison(input: { bytes: Uint8Array }): OpenComparison {
  const body = readJson(input.bytes)
  const day = member(body, 'day')
  const schema = openComparison.extend({
    forecast: meant(body, 'forecast', skyDocument, 'sky'),
    measured: meant(body, 'measured', skyDocument, 'sky'),
    day: openDay.extend({ car: meant(day, 'car', carDocument), race: meant(day, 'race', raceDocument) }).optional(),
  })
  return checked(schema, body, 'sky comparison request')
}

/** Whole documents of a comparison. */
export interface ComparisonInputs {
  forecast: unknown
  measured: unknown
  zone?: string
  day?: unknown
}

/**
 * The comparison of two skies, as JSON.
 *
 * @throws Fault 'invalid-document', or 'cannot-compare' where the documents do not fit together
 */
export function compareJson(input: ComparisonInputs): string {
  const request = checked(comparisonRequest, input, 'sky comparison request')
  try {
    return JSON.stringify(compareSkies(request))
  } catch (error) {
    if (!(error instanceof InputError)) throw error
    const { field, detail } = error
    throw new Fault('cannot-compare', `${field}: ${detail}.`, { errors: [{ field, detail }] })
  }
}
