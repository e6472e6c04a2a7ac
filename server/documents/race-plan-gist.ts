import { z } from 'zod'
import { type RacePlanDocument, racePlanDocument } from './race-plan.ts'

const { close } = racePlanDocument.shape.days.element.shape

/** What a list of race plans tells of each: enough to lay them side by side. */
export const racePlanGist = z.strictObject({
  outcome: racePlanDocument.shape.outcome.shape.kind,
  drivingMin: racePlanDocument.shape.drivingMin,
  closes: z
    .array(z.strictObject({ date: z.string(), kind: close.shape.kind, chargePct: z.number() }))
    .describe('with what each day closes, or is wanted to [% of charge]'),
})

export type RacePlanGist = z.output<typeof racePlanGist>

/** A race plan in short. */
export const raceGistOf = ({ outcome, drivingMin, days }: RacePlanDocument): RacePlanGist => ({
  outcome: outcome.kind,
  drivingMin,
  closes: days.map(({ date, close: { kind, closing, wanted } }) => ({
    date,
    kind,
    chargePct: (closing ?? wanted).chargePct,
  })),
})
