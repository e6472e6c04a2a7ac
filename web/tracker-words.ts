import type { KeptReading, Move, TrackerDayWork, TrackerReport, Trackers } from './crew-types.ts'
import { type CurvePoint, curveAt, curveInUse, pct1 } from './log-reading.ts'
import { grouped, round10, signed, THIN } from './format.ts'
import type { Phrase } from './sentence.ts'
import { outsideMinutes, outsideWh, smallWh } from './tracker-part.ts'

/** A curve's mean over where the day's energy fell, each bin taken at its middle; null where none fell on it. */
export function overDay(report: TrackerReport, which: 'bench' | 'learned'): CurvePoint | null {
  const sum = { wh: 0, efficiencyPct: 0, lowPct: 0, highPct: 0 }
  for (const { fromW, toW, wh } of report.day?.fell ?? []) {
    const at = curveAt(report.inputW, report[which], (fromW + toW) / 2)
    if (at === null || wh <= 0) continue
    sum.wh += wh
    sum.efficiencyPct += at.efficiencyPct * wh
    sum.lowPct += at.lowPct * wh
    sum.highPct += at.highPct * wh
  }
  if (sum.wh === 0) return null
  return {
    efficiencyPct: sum.efficiencyPct / sum.wh,
    lowPct: sum.lowPct / sum.wh,
    highPct: sum.highPct / sum.wh,
  }
}

/** How far a tracker's readings put it from its bench curve, where its band leaves no doubt; else 0. [points] */
export function offBench(report: TrackerReport): number {
  const bench = overDay(report, 'bench')
  const learned = overDay(report, 'learned')
  if (bench === null || learned === null || !report.readings.some(isTaken)) return 0
  const isInside = bench.efficiencyPct >= learned.lowPct && bench.efficiencyPct <= learned.highPct
  return isInside ? 0 : learned.efficiencyPct - bench.efficiencyPct
}

/** Whether a reading is learned from. */
export const isTaken = (entry: KeptReading): boolean => entry.counts && !entry.isSetAside

/** The one sentence over all trackers: which to look at first, or that none calls for it. */
export function trackersSentence({ items, work }: Trackers): Phrase {
  const worst = items.reduce<{ report: TrackerReport; points: number } | null>((last, report) => {
    const points = offBench(report)
    return points < 0 && points < (last?.points ?? 0) ? { report, points } : last
  }, null)
  if (worst !== null) {
    const { report, points } = worst
    const lostWh = round10(-points * (report.day?.onePointWh ?? 0))
    const cost: Phrase = lostWh > 0 ? [', ', { text: grouped(lostWh), unit: 'Wh' }, ' over the day'] : []
    return [
      `Look at the ${report.name} first: `,
      { text: pct1(-points) },
      ' points under its bench curve',
      ...cost,
      '.',
    ]
  }
  const denied = deniedPhrase(work)
  if (denied !== null) return denied
  const taken = items.flatMap((report) => report.readings.filter(isTaken))
  if (taken.length === 0) return ['No reading counts yet: the bench curves stand.']
  return items.some((report) => offBench(report) > 0)
    ? ['No tracker is under its bench curve: nothing to do.']
    : ['All trackers are on their curves, as far as the readings tell: nothing to do.']
}

/** Less than this lost at the edges of a window calls for nothing. [Wh] */
const NOTICEABLE_WH = 10

/** The tracker whose window costs most on the day; null where none costs enough to speak of. */
function deniedPhrase(work: TrackerDayWork | null): Phrase | null {
  const worst = work?.trackers.reduce((a, b) => (outsideWh(b.parts[0]) > outsideWh(a.parts[0]) ? b : a))
  if (worst === undefined || outsideWh(worst.parts[0]) < NOTICEABLE_WH) return null
  const [day] = worst.parts
  return [
    `The ${worst.name} is outside its window for `,
    { text: grouped(outsideMinutes(day)), unit: 'min' },
    ' of the day: ',
    { text: smallWh(outsideWh(day)), unit: 'Wh' },
    ' denied.',
  ]
}

/** The terms that the readings do not tell apart from the bench, by name. */
export function untold({ terms }: TrackerReport): string {
  const names = terms.filter((term) => !term.isIdentified).map((term) => term.name)
  return names.length === 0 ? '' : `Not told by the readings, as on the bench: ${names.join(', ')}.`
}

/** How a tracker stands to its curve, in few words. */
export function standingOf(report: TrackerReport): string {
  const taken = report.readings.filter(isTaken).length
  const readings = taken === 1 ? '1 reading' : `${taken} readings`
  const off = offBench(report)
  if (taken === 0) return 'Bench curve; no reading counts yet'
  if (off === 0) return `On its bench curve by ${readings}`
  return `${pct1(Math.abs(off))} points ${off < 0 ? 'under' : 'over'} its bench curve by ${readings}`
}

/** The curve that the forecasts use. */
export const usedCurve = (report: TrackerReport, { uses }: Trackers) => curveInUse(report, uses)

const CAUSES: Record<Move['cause'], string> = {
  reading: 'Reading',
  'set-aside': 'Reading set aside',
  'take-back': 'Reading taken back',
  'use-bench': 'Back to the bench',
  'use-learned': 'Bench and readings',
  choice: 'Choice',
  engine: 'Newer models',
}

/** What moved a day, in one line: the cause, whose tracker, by how much, to where. */
export function moveText(move: Move, { items }: Trackers): string {
  const of = items.find(({ readings }) => readings.some(({ reading }) => reading.id === move.readingId))
  const cause = of === undefined ? CAUSES[move.cause] : `${CAUSES[move.cause]}, ${of.name}`
  const { closingWhBefore: was, closingWhAfter: is } = move
  if (is === null) return move.cause === 'choice' ? `${cause} taken back: nothing is followed.` : `${cause}.`
  const by = was === null ? '' : `${signed(is - was)}${THIN}Wh `
  return `${cause}: ${by}to ${grouped(is)}${THIN}Wh at close.`
}
