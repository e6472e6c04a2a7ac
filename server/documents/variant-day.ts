import type { ZodType } from 'zod'
import type { Opening } from '../engine/forecast.ts'
import { InputError } from '../engine/input-error.ts'
import { changedDay } from '../engine/planner/changed-day.ts'
import { carDocument } from './car.ts'
import { checkDocument } from './check.ts'
import { type DrivenDay, drivenRace, wantedCharge } from './forecast.ts'
import { merged } from './merge-patch.ts'
import { endedBy } from './plan-camp.ts'
import type { PlanRequest } from './plan-request.ts'
import type { Problem } from './problem.ts'
import { raceDocument } from './race.ts'
import { skyDocument } from './sky.ts'
import type { SpeedsDocument } from './speeds.ts'
import type { VariantDocument } from './variant.ts'
import { changeOf } from './what-if-model.ts'

/** A day as a variant has it. */
export interface VariantDay {
  request: PlanRequest
  day: DrivenDay
  targetCharge: number
  assumptions: string[]
}

/** Speeds to lay a day out with before it is planned. */
const QUICK: SpeedsDocument = { kind: 'constant', speedKmh: 70 }

/** What a variant's patches make of the documents, or every problem with the field of the patched document. */
export function patched(
  request: PlanRequest,
  { car, race, sky }: VariantDocument,
): { request: PlanRequest; problems: Problem[] } {
  const problems: Problem[] = []
  const withPatch = <T>(of: string, schema: ZodType<T>, given: T, patch?: object): T => {
    if (patch === undefined) return given
    const checked = checkDocument(schema, merged(given, patch))
    if (checked.problems === undefined) return checked.document
    problems.push(...checked.problems.map((one) => ({ ...one, field: `${of}.${one.field}` })))
    return given
  }
  return {
    request: {
      ...request,
      car: withPatch('car', carDocument, request.car, car),
      race: withPatch('race', raceDocument, request.race, race),
      sky: withPatch('sky', skyDocument, request.sky, sky),
    },
    problems,
  }
}

/**
 * The day of a variant in the engine's terms.
 *
 * Where the race is the base's, the day opens as the base's does: a variant is of this day, not of those before it.
 *
 * @param opening  how the base's day opens
 * @throws InputError when the documents do not fit together: field, value and what was expected
 */
export function variantDay(base: PlanRequest, variant: VariantDocument, opening?: Opening): VariantDay {
  const { request } = patched(base, variant)
  const { trackerLossPct = 100, byTime, ...change } = variant.change ?? {}
  const opened = variant.race === undefined ? opening : undefined
  const { days, assumptions } = drivenRace({ ...request, speeds: variant.speeds ?? QUICK }, (day) => day, opened)
  const own = days[0]
  const planned = wantedCharge(own, request.targetPct)
  const { targetCharge: wanted, ...by } = changeOf(own, change, planned, 'change')
  const { race, opening: opens } = changedDay(own.race, own.dayIndex, own.opening, {
    ...by,
    trackerLoss: trackerLossPct / 100,
  })
  const targetCharge = wanted ?? wantedCharge({ ...own, race }, request.targetPct)
  const ended = endedOf({ ...own, race }, request.byTime, byTime)
  return { request, day: { ...own, race: ended, opening: opens, targetCharge }, targetCharge, assumptions }
}

function endedOf(day: DrivenDay, asked: string | undefined, changed: string | undefined): DrivenDay['race'] {
  try {
    return endedBy(day, changed ?? asked)
  } catch (error) {
    if (changed === undefined || !(error instanceof InputError)) throw error
    throw new InputError(error.code, `change.${error.field}`, error.detail)
  }
}
