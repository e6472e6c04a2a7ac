import type { Problem } from '../documents/problem.ts'
import { counted, Fault } from '../errors.ts'
import { decodeText } from '../files/decode-text.ts'
import type { FileReading, Notice } from '../files/file-reading.ts'
import { readCsvRoute } from '../files/csv-route.ts'
import { readCsvSky } from '../files/csv-sky.ts'
import { readGpxRoute } from '../files/gpx-route.ts'
import { climateOptions } from '../files/climate-options.ts'
import { readEpwSky } from '../files/epw-sky.ts'
import { routeTableOptions } from '../files/route-table.ts'
import { skyTableOptions } from '../files/sky-table.ts'
import { readTmy3Sky } from '../files/tmy3-sky.ts'
import { DOCUMENTS, type Kind } from './documents.ts'
import { checked, readJson } from './read-json.ts'

/** How a body is written. */
export type Format = 'json' | 'gpx' | 'csv'

export interface BodyInput {
  kind: Kind
  format: Format
  bytes: Uint8Array
  /** Options of the reader, from the query. */
  options: Record<string, unknown>
}

/** A checked document with what was noticed on the way; `summary` only for files. */
export interface ReadDocument {
  name: string
  document: object
  notices: Notice[]
  summary?: unknown
}

/**
 * The document in a body: JSON, or a file of another format.
 *
 * @throws Fault 'empty-body', 'bad-json', 'invalid-document' or 'invalid-file' with every problem
 */
export function readDocument(input: BodyInput): ReadDocument {
  if (input.format !== 'json') return readFile(input)
  const document = checked(DOCUMENTS[input.kind], readJson(input.bytes), input.kind)
  return { name: document.name, document, notices: [] }
}

function readFile({ kind, format, bytes, options }: BodyInput): ReadDocument {
  const text = readText(bytes)
  const reading = read(kind, format, text, options)
  if (reading.problems !== undefined) throw refused(reading.problems)
  const { document, notices, summary } = reading
  return { name: document.name, document, notices, summary }
}

/**
 * The text of a file.
 *
 * @throws Fault 'empty-body', or 'invalid-file' where the bytes are no text
 */
export function readText(bytes: Uint8Array): string {
  if (bytes.length === 0) throw new Fault('empty-body', 'The request has no body; expected a file.')
  const { text, problems } = decodeText(bytes)
  if (text === undefined) throw refused(problems)
  return text
}

/** A file with problems. */
export const refused = (problems: Problem[]): Fault =>
  new Fault('invalid-file', `The file has ${counted(problems.length, 'problem')}.`, { errors: problems })

type Reading = FileReading<object & { name: string }, unknown>

function read(kind: Kind, format: Format, text: string, options: Record<string, unknown>): Reading {
  if (kind === 'route' && format === 'gpx') return readGpxRoute(text, options)
  if (kind === 'route') return readCsvRoute(text, routeTableOptions.parse(options))
  if (kind === 'sky') return readSky(text, options)
  throw new Fault('unsupported-media-type', `A ${kind} is not read from ${format}.`)
}

/** A sky by the kind of its file, a table where nothing is said. */
function readSky(text: string, { fileKind, ...options }: Record<string, unknown>): Reading {
  if (fileKind === 'epw') return readEpwSky(text, climateOptions.parse(options))
  if (fileKind === 'tmy3') return readTmy3Sky(text, climateOptions.parse(options))
  return readCsvSky(text, skyTableOptions.parse(options))
}
