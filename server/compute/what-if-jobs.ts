import { whatIfRequest } from '../documents/what-if.ts'
import { whatIfDocuments } from '../documents/what-if-model.ts'
import { openRequest, readOpenRequest } from './forecast-jobs.ts'
import { fitting } from './fitting.ts'
import { checked } from './read-json.ts'

/** A what-if request whose documents stand in it or are named by their ids. */
export const openWhatIf = openRequest
  .omit({ speeds: true })
  .extend(whatIfRequest.pick({ date: true, targetPct: true, byTime: true, variants: true }).shape)
  .meta({ title: 'Open what-if request' })

/** The request in a body, checked: documents that it only names are left as `{ id }`, what is asked stands apart. */
export function readWhatIf(input: { bytes: Uint8Array }) {
  const { targetPct, byTime, variants, ...open } = readOpenRequest(openWhatIf, input.bytes, 'what-if request')
  return { open, asked: { targetPct, byTime, variants } }
}

/**
 * Quick answers on whole documents, as JSON.
 *
 * @throws Fault 'invalid-document', or 'cannot-forecast' where the documents do not fit together
 */
export function whatIfJson(input: unknown): string {
  const request = checked(whatIfRequest, input, 'what-if request')
  return fitting(() => JSON.stringify(whatIfDocuments(request)))
}
