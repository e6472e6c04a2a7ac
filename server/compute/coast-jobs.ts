import { carDocument } from '../documents/car.ts'
import { coastDownAnswer, type TestCar } from '../documents/coast-down-answer.ts'
import { coastDownRequest, type CoastDownRequest } from '../documents/coast-down.ts'
import type { CoastDownDocument } from '../documents/coast-down-result.ts'
import { counted, Fault } from '../errors.ts'
import { readCsvCoast } from '../files/csv-coast.ts'
import { coastTableOptions } from '../files/coast-table.ts'
import type { Notice } from '../files/file-reading.ts'
import { type Format, readText, refused } from './file-jobs.ts'
import { checked, readJson } from './read-json.ts'

/** The body of a coast-down test, and for a file what is known beside it and how it is read. */
export interface CoastBody {
  format: Format
  bytes: Uint8Array
  /** Of a file: car, air and what else is known, not yet checked. */
  test: Record<string, unknown>
  /** Options of the file's reader. */
  table: Record<string, unknown>
}

/** A test with what was noticed in its file. */
export interface ReadCoastDown {
  request: CoastDownRequest
  notices: Notice[]
}

/**
 * The coast-down test in a body: a JSON document, or a logged table.
 *
 * @throws Fault 'empty-body', 'bad-json', 'invalid-document' or 'invalid-file' with every problem
 */
export function readCoastDown({ format, bytes, test, table }: CoastBody): ReadCoastDown {
  if (format === 'json') return { request: checked(coastDownRequest, readJson(bytes), 'coast-down test'), notices: [] }
  const reading = readCsvCoast(readText(bytes), coastTableOptions.parse(table))
  if (reading.problems !== undefined) throw refused(reading.problems)
  const request = checked(coastDownRequest, { ...test, runs: reading.document.runs }, 'coast-down test')
  return { request, notices: reading.notices }
}

/** A test and the stored car that it names, as it is kept. */
export interface CoastInput {
  request: CoastDownRequest
  car: { id: string; version: number; body: unknown } | null
}

/**
 * Rolling and drag of a test.
 *
 * @throws Fault 'cannot-fit' with every reason why its runs do not identify them
 */
export function coastDownJob({ request, car }: CoastInput): CoastDownDocument {
  const known: TestCar | null =
    car === null ? null : { id: car.id, version: car.version, document: checked(carDocument, car.body, 'car') }
  const { result, refused: reasons } = coastDownAnswer(request, known)
  if (reasons === undefined) return result
  const detail = `Rolling and drag do not follow from these runs: ${counted(reasons.length, 'reason')}.`
  throw new Fault('cannot-fit', detail, { errors: reasons })
}
