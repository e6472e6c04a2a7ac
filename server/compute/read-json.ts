import type { z } from 'zod'
import { checkDocument } from '../documents/check.ts'
import { counted, Fault } from '../errors.ts'
import { decodeText } from '../files/decode-text.ts'
import { jsonProblem } from './json-problem.ts'

/**
 * What the bytes say as JSON.
 *
 * @throws Fault 'empty-body', or 'bad-json' with line and column of the first fault
 */
export function readJson(bytes: Uint8Array): unknown {
  if (bytes.length === 0) throw new Fault('empty-body', 'The request has no body; expected a JSON document.')
  const { text, problems } = decodeText(bytes)
  if (text === undefined) throw new Fault('bad-json', 'The body is not text.', { errors: problems })
  try {
    return JSON.parse(text)
  } catch {
    const problem = jsonProblem(text)
    const place = problem === null ? '' : `Line ${problem.line}, column ${problem.column}: ${problem.detail}. `
    throw new Fault('bad-json', `${place}Nothing was read.`, { errors: problem === null ? [] : [problem] })
  }
}

/**
 * A document as its schema understands it, defaults filled in.
 *
 * @param what  the document in words, for example 'car'
 * @throws Fault 'invalid-document' with every problem
 */
export function checked<S extends z.ZodType>(schema: S, input: unknown, what: string): z.output<S> {
  const { document, problems } = checkDocument(schema, input)
  if (problems === undefined) return document
  throw new Fault('invalid-document', `The ${what} has ${counted(problems.length, 'problem')}.`, { errors: problems })
}
