import { type Belief, learn } from './belief.ts'
import { checkReading, type Evidence, type MeterPrior, type TrackerReading } from './evidence.ts'
import { InputError } from './input-error.ts'
import { isSwapOf, judge, type Judgement } from './reading-check.ts'
import type { TrackerWindow } from './tracker.ts'

/** Readings in the order in which they came, and what they are judged by. */
export interface ReadingLog {
  trackers: Evidence['trackers']
  /** Of each tracker. */
  windows: readonly TrackerWindow[]
  meters: readonly MeterPrior[]
  readings: readonly TrackerReading[]
  packFullV: number | null
}

/**
 * Judges readings one after another, each by what was held before it, and what is held after all.
 *
 * A reading that was far off counts, and its judgement says so, once a later one has the clamps swapped.
 *
 * @throws InputError naming the field that is wrong
 */
export function judgeInOrder(log: ReadingLog): { judgements: Judgement[]; belief: Belief } {
  const { trackers, meters, windows, packFullV } = log
  if (windows.length !== trackers.length) {
    throw new InputError('wrong-length', 'windows', `${windows.length} given, ${trackers.length} expected`)
  }
  const judgements: Judgement[] = []
  const counted = (): TrackerReading[] =>
    log.readings.slice(0, judgements.length).filter((_, n) => judgements[n].counts)
  let belief = learn({ trackers, meters, readings: [] })
  for (const [n, reading] of log.readings.entries()) {
    checkReading(reading, trackers.length, meters.length, `readings[${n}]`)
    const window = windows[reading.tracker]
    const m = log.readings.slice(0, n).findLastIndex((other, k) => isSwapOf(reading, other) && isOfUse(judgements[k]))
    const swapped = m < 0 ? undefined : log.readings[m]
    const judgement = judge(reading, { belief, window, packFullV, swapped })
    judgements.push(judgement)
    if (swapped !== undefined && judgement.counts && !judgements[m].counts) {
      judgements[m] = judge(swapped, { belief, window, packFullV, swapped: reading })
    }
    if (judgement.counts) belief = learn({ trackers, meters, readings: counted() })
  }
  return { judgements, belief }
}

const isOfUse = ({ verdict }: Judgement): boolean => verdict === 'counts' || verdict === 'far-off'
