import type { z } from 'zod'
import { MOST_PROBLEMS, checkDocument } from '../documents/check.ts'
import type { Problem } from '../documents/problem.ts'

/** Largest file that is read. [bytes; characters once decoded] */
export const MAX_FILE_BYTES = 20_000_000

/** Something a reader of the file did on its own and the person should know. */
export interface Notice {
  detail: string
  line?: number
  column?: number
}

/** What a file gave: a checked document with what was noticed and found, or every problem it has. */
export type FileReading<T, S> =
  | { document: T; notices: Notice[]; summary: S; problems?: undefined }
  | { document?: undefined; problems: Problem[] }

export interface ProblemList {
  add(problem: Problem): void
  readonly count: number
  list(): Problem[]
}

/** Collects problems: the first hundred are kept, the rest only counted and named in a last entry. */
export function problemList(): ProblemList {
  const kept: Problem[] = []
  let count = 0
  let lastLine: number | undefined
  return {
    add(problem) {
      count++
      lastLine = problem.line ?? lastLine
      if (kept.length < MOST_PROBLEMS) kept.push(problem)
    },
    get count() {
      return count
    },
    list() {
      if (count <= MOST_PROBLEMS) return kept
      return [...kept, { field: 'file', detail: `and ${count - MOST_PROBLEMS} more problems`, line: lastLine ?? 1 }]
    },
  }
}

export interface NoticeList {
  add(notice: Notice): void
  list(): Notice[]
}

/** Collects notices; after the first hundred one last notice says how many more there are. */
export function noticeList(): NoticeList {
  const kept: Notice[] = []
  let count = 0
  return {
    add(notice) {
      if (++count <= MOST_PROBLEMS) kept.push(notice)
    },
    list: () => (count <= MOST_PROBLEMS ? kept : [...kept, { detail: `and ${count - MOST_PROBLEMS} more notices` }]),
  }
}

/** The problem of a text over the limit, or null. */
export function overLimit(size: number): Problem | null {
  if (size <= MAX_FILE_BYTES) return null
  const megabytes = (bytes: number) => (bytes / 1e6).toFixed(1)
  return {
    field: 'file',
    value: `${megabytes(size)} MB`,
    detail: `expected a file of at most ${megabytes(MAX_FILE_BYTES)} MB`,
    line: 1,
    column: 1,
  }
}

/** The reading of a document put together from a file; what the schema still refuses is placed in the file. */
export function checkedReading<S extends z.ZodType, Y>(
  schema: S,
  input: z.input<S>,
  found: { notices: Notice[]; summary: Y },
): FileReading<z.output<S>, Y> {
  const checked = checkDocument(schema, input)
  if (checked.problems === undefined) return { document: checked.document, ...found }
  return { problems: checked.problems.map((problem) => ({ line: 1, ...problem })) }
}

/** A text of a file as the name of something: one line, 1 to 80 characters, or the fallback. */
export function asLabel(text: string | undefined, fallback: string): string {
  // oxlint-disable-next-line no-control-regex -- control characters are exactly what is taken out
  const line = (text ?? '').replace(/[\u0000-\u001f\u007f\s]+/g, ' ').trim()
  return line === '' ? fallback : line.slice(0, 80)
}
