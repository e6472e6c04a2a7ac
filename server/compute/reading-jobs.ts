import { z } from 'zod'
import { learnedOf, strangers } from '../documents/belief-model.ts'
import { carDocument } from '../documents/car.ts'
import { type JudgedReading, judgeReadings, type Verdicts } from '../documents/judgement.ts'
import type { LearnedLosses } from '../documents/learned.ts'
import { readingDocument, type ReadingDocument } from '../documents/reading.ts'
import { type ReportInput, type TrackerReport, trackerReports } from '../documents/tracker-report.ts'
import { InputError } from '../engine/input-error.ts'
import { counted, Fault } from '../errors.ts'
import { checked, readJson } from './read-json.ts'

/** Most readings of one request. */
const MOST_READINGS = 100

const batch = z.strictObject({ readings: z.array(readingDocument).min(1).max(MOST_READINGS) })

/** The body of a request with readings: one, or a list of them. */
export const readingsBody = z.union([readingDocument, batch])

/** The readings in a body, and whether they came as a list. */
export function readReadings({ bytes }: { bytes: Uint8Array }): { readings: ReadingDocument[]; isBatch: boolean } {
  const body = readJson(bytes)
  const isBatch = typeof body === 'object' && body !== null && Object.hasOwn(body, 'readings')
  if (!isBatch) return { readings: [checked(readingDocument, body, 'reading')], isBatch }
  const { readings } = checked(batch, body, 'list of readings')
  return { readings, isBatch }
}

/** Readings to be judged by those that came before. */
export interface ToJudge {
  car: unknown
  before: JudgedReading[]
  fresh: ReadingDocument[]
  widen: number
  /** Whether the readings came as a list, whose places then stand in the names of wrong fields. */
  isBatch: boolean
}

/**
 * What readings say against a stored car.
 *
 * @throws Fault 'invalid-document' naming trackers or meters that the car does not have
 */
export function judgeJob({ car, before, fresh, widen, isBatch }: ToJudge): Verdicts {
  const document = checked(carDocument, car, 'car')
  const errors = fresh.flatMap((reading, n) =>
    strangers(document, reading).map((problem) => ({
      ...problem,
      field: isBatch ? `readings[${n}].${problem.field}` : problem.field,
    })),
  )
  if (errors.length > 0) {
    const detail = `The readings name ${counted(errors.length, 'thing')} that ${document.name} does not have.`
    throw new Fault('invalid-document', detail, { errors })
  }
  return learning(() => judgeReadings(document, before, fresh, widen))
}

/** Losses by tracker as the readings that count show them. */
export const learnJob = (input: { car: unknown; counting: ReadingDocument[]; widen: number }): LearnedLosses =>
  learning(() => learnedOf(checked(carDocument, input.car, 'car'), input.counting, input.widen))

/** Every tracker before and after its readings. */
export const reportJob = (input: Omit<ReportInput, 'car'> & { car: unknown }): TrackerReport[] =>
  learning(() => trackerReports({ ...input, car: checked(carDocument, input.car, 'car') }))

/** A bench that tells nothing is a fault of the car's document, not of the service. */
function learning<T>(work: () => T): T {
  try {
    return work()
  } catch (error) {
    if (!(error instanceof InputError)) throw error
    const { field, detail } = error
    throw new Fault('cannot-forecast', `${field}: ${detail}.`, { errors: [{ field, detail }] })
  }
}
