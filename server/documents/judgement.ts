import { z } from 'zod'
import { learn } from '../engine/belief.ts'
import { isSwapOf, judge, type Judgement } from '../engine/reading-check.ts'
import { carEvidence } from './belief-model.ts'
import type { CarDocument } from './car.ts'
import type { ReadingDocument } from './reading.ts'

const points = (meaning: string) => z.number().describe(`${meaning} [points of efficiency]`)

/** What a reading says against its tracker's curve, as people read it. */
export const judgementDocument = z.strictObject({
  verdict: z.enum(['counts', 'impossible', 'at-limit', 'pack-full', 'far-off']),
  counts: z.boolean().describe('whether it is learned from'),
  reason: z.string().describe('one sentence for people'),
  limit: z.string().nullable().describe('edge of the window at which it was taken'),
  efficiencyPct: z.number().describe('power out over power in, as shown [%]'),
  uncertaintyPct: points('standard uncertainty of that from the meters'),
  expectedPct: z.number().describe('the tracker’s curve at that point [%]'),
  bandPct: z.array(z.number()).length(2).describe('the curve’s 95 % band there, from and to [%]'),
  swappedEfficiencyPct: z
    .number()
    .nullable()
    .describe('with the clamps swapped: efficiency of both readings, free of their gains [%]'),
})

export type JudgementDocument = z.output<typeof judgementDocument>

/** A reading that was judged before. */
export interface JudgedReading {
  reading: ReadingDocument
  judgement: Pick<JudgementDocument, 'verdict' | 'counts'>
}

export interface Verdicts {
  /** Of the readings given, in their order. */
  judgements: JudgementDocument[]
  /** Earlier readings that count now that the clamps were swapped. */
  again: { id: string; judgement: JudgementDocument }[]
}

/**
 * What new readings say, each judged by those before it.
 *
 * @param before  judged readings of the same car that are not set aside, in the order in which they came
 * @param fresh   readings whose trackers the car has
 */
export function judgeReadings(
  car: CarDocument,
  before: readonly JudgedReading[],
  fresh: readonly ReadingDocument[],
  widen = 1,
): Verdicts {
  const names = new Set(car.trackers.map(({ name }) => name))
  const held = before.filter(({ reading }) => names.has(reading.tracker))
  const all = carEvidence(car, [...held.map(({ reading }) => reading), ...fresh], widen)
  const { windows, packFullV } = all
  const states = held.map(({ judgement }) => ({ verdict: judgement.verdict, counts: judgement.counts }))
  const judgements: JudgementDocument[] = []
  const again = new Map<string, JudgementDocument>()
  for (const reading of all.readings.slice(held.length)) {
    const belief = learn({ ...all, readings: all.readings.filter((_, n) => n < states.length && states[n].counts) })
    const isOfUse = (m: number): boolean => states[m].verdict === 'counts' || states[m].verdict === 'far-off'
    const m = all.readings.slice(0, states.length).findLastIndex((other, k) => isSwapOf(reading, other) && isOfUse(k))
    const window = windows[reading.tracker]
    const swapped = m < 0 ? undefined : all.readings[m]
    const judgement = judge(reading, { belief, window, packFullV, swapped })
    if (swapped !== undefined && judgement.counts && !states[m].counts) {
      const anew = judge(swapped, { belief, window, packFullV, swapped: reading })
      states[m] = { verdict: anew.verdict, counts: anew.counts }
      if (m < held.length) again.set(swapped.id, documentOf(anew))
      else judgements[m - held.length] = documentOf(anew)
    }
    states.push({ verdict: judgement.verdict, counts: judgement.counts })
    judgements.push(documentOf(judgement))
  }
  return { judgements, again: [...again].map(([id, judgement]) => ({ id, judgement })) }
}

const documentOf = (judgement: Judgement): JudgementDocument => ({
  verdict: judgement.verdict,
  counts: judgement.counts,
  reason: judgement.reason,
  limit: judgement.limit,
  efficiencyPct: judgement.efficiency * 100,
  uncertaintyPct: judgement.uncertainty * 100,
  expectedPct: judgement.expected * 100,
  bandPct: [judgement.low * 100, judgement.high * 100],
  swappedEfficiencyPct: judgement.swappedEfficiency === null ? null : judgement.swappedEfficiency * 100,
})
