import { checkDocument } from '../documents/check.ts'
import type { Problem } from '../documents/problem.ts'
import { type ErrorCode, Fault } from '../errors.ts'
import { storeFault } from '../store/store-error.ts'
import type { z } from 'zod'

/** Wrong parts of a request, found before its route runs. */
export class WrongPart extends Error {
  readonly part: string
  readonly problems: Problem[]

  constructor(part: string, problems: Problem[]) {
    super('a part of the request is wrong')
    this.part = part
    this.problems = problems
  }
}

/** Checks a part of a request by its schema; bodies are checked by whoever reads them. */
export function checkPart(schema: z.ZodType, part: string | undefined) {
  return (data: unknown) => {
    if (part === undefined || part === 'body') return { value: data }
    const { document, problems } = checkDocument(schema, data)
    return problems === undefined ? { value: document } : { error: new WrongPart(part, problems) }
  }
}

const LONG_ID: Problem = { field: 'id', detail: 'expected 1 to 64 characters' }

/** Errors of the HTTP layer by their code there. */
const HTTP_ERRORS: Record<string, [ErrorCode, string, Problem[]?]> = {
  FST_ERR_CTP_BODY_TOO_LARGE: ['too-large', 'The body is over the limit of this address.'],
  FST_ERR_CTP_INVALID_CONTENT_LENGTH: ['bad-request', 'The body is not as long as its Content-Length says.'],
  FST_ERR_BAD_URL: ['bad-address', 'The address holds a malformed %-sequence.'],
  FST_ERR_MAX_PARAM_LENGTH: ['bad-id', 'An id in the address is longer than 64 characters.', [LONG_ID]],
}

/** What is told to the client about anything thrown; an unknown error tells nothing of its cause. */
export function faultOf(error: unknown): Fault {
  if (error instanceof Fault) return error
  if (error instanceof WrongPart) return wrongPart(error)
  const stored = storeFault(error)
  if (stored?.code === 'field-not-storable') {
    const errors = [{ field: stored.field ?? 'document', detail: stored.message }]
    return new Fault('invalid-document', stored.message, { errors })
  }
  if (stored !== null && stored.code !== 'forecast-id-taken')
    return new Fault('store-unavailable', 'The database does not answer; try again in a moment.', { cause: error })
  const known = HTTP_ERRORS[member(error, 'code')]
  if (known !== undefined) return new Fault(known[0], known[1], { cause: error, errors: known[2] })
  const status = Number(member(error, 'statusCode'))
  if (status >= 400 && status < 500) return new Fault('bad-request', 'The request is malformed.', { cause: error })
  return new Fault('internal', 'The service has written down what happened.', { cause: error })
}

const member = (error: unknown, name: string): string => {
  const value = error instanceof Error ? Object.entries(error).find(([key]) => key === name)?.[1] : undefined
  return String(value ?? '')
}

function wrongPart({ part, problems }: WrongPart): Fault {
  if (part === 'params')
    return new Fault('bad-id', 'The address names something that cannot exist.', { errors: problems })
  return new Fault('bad-query', 'The query of the address has errors.', { errors: problems })
}
