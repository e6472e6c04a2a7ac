import { z } from 'zod'
import { type Belief, coverageFactor } from '../engine/belief.ts'
import { efficiencyBand } from '../engine/loss-band.ts'
import { TERMS, type Term } from '../engine/loss-terms.ts'
import { carBelief, usualVolts } from './belief-model.ts'
import type { DayBudget } from './budget.ts'
import type { CarDocument } from './car.ts'
import { judgementDocument } from './judgement.ts'
import { readingDocument } from './reading.ts'
import { toldText } from './told-words.ts'
import { benchFit } from './tracker-model.ts'

const column = (meaning: string) => z.array(z.number()).describe(`${meaning} [%]`)

const curve = z
  .strictObject({
    efficiencyPct: column('efficiency'),
    lowPct: column('start of its 95 % band'),
    highPct: column('end of its 95 % band'),
  })
  .describe('one value per input power')

/** A reading as it is kept, with what it says. */
export const keptReading = judgementDocument.extend({
  reading: readingDocument,
  carId: z.string(),
  carVersion: z.int().describe('version of the car when the reading came'),
  receivedAt: z.string().describe('instant (ISO 8601, UTC)'),
  isSetAside: z.boolean().describe('whether a planner took it out; it stays kept'),
})

export type KeptReading = z.output<typeof keptReading>

const term = z.strictObject({
  name: z.string(),
  unit: z.string(),
  value: z.number().describe('as learned, or of the bench where nothing is [unit]'),
  sd: z.number().describe('its standard deviation [unit]'),
  benchValue: z.number().describe('before any reading [unit]'),
  benchSd: z.number().describe('its standard deviation then [unit]'),
  isIdentified: z.boolean().describe('whether the readings tell it from the others; else it keeps its bench'),
})

const day = z.strictObject({
  date: z.string(),
  wh: z.number().describe('energy at its input [Wh]'),
  sharePct: z.number().describe('of what all trackers take [%]'),
  outsideMin: z.number().describe('time outside its window while there was sun [min]'),
  deniedWh: z.number().describe('denied by its window or a full pack [Wh]'),
  meanEfficiencyPct: z.number().describe('over the day [%]'),
  fell: z.array(
    z.strictObject({
      fromW: z.number().describe('input power from [W]'),
      toW: z.number().describe('input power to [W]'),
      wh: z.number().describe('energy that came at such powers [Wh]'),
    }),
  ),
  onePointWh: z.number().describe('what one point of efficiency more brings over the day, before the pack [Wh]'),
})

/** A tracker as its bench and its readings show it. */
export const trackerReport = z.strictObject({
  name: z.string(),
  maxW: z.number().describe('most power at its input [W]'),
  inputV: z.number().describe('input voltage of the curves [V]'),
  outputV: z.number().describe('output voltage of the curves [V]'),
  inputW: z.array(z.number()).describe('input powers of the curves [W]'),
  bench: curve,
  learned: curve,
  terms: z.array(term),
  benchTold: z.string().nullable().describe('which losses its bench tells; null where the losses were given'),
  readings: z.array(keptReading),
  day: day.nullable().describe('from the budget that the crew follows'),
})

export type TrackerReport = z.output<typeof trackerReport>

const POINTS = 40

const TERM_NAMES: Record<Term, { name: string; unit: string; scale: number }> = {
  standingW: { name: 'Standing', unit: 'W', scale: 1 },
  switchingFraction: { name: 'Switching', unit: '%', scale: 100 },
  conductionOhm: { name: 'Conduction', unit: 'Ω', scale: 1 },
  rectifierV: { name: 'Rectifier', unit: 'V', scale: 1 },
}

export interface ReportInput {
  car: CarDocument
  /** Of this car, in the order in which they came. */
  readings: KeptReading[]
  widen: number
  day: Pick<DayBudget, 'date' | 'trackers'> | null
}

/** Every tracker of a car before and after its readings, and its part in a day. */
export function trackerReports({ car, readings, widen, day: budget }: ReportInput): TrackerReport[] {
  const counting = readings.filter((kept) => kept.counts && !kept.isSetAside).map(({ reading }) => reading)
  const before = carBelief(car, [], widen)
  const after = counting.length === 0 ? before : carBelief(car, counting, widen)
  return car.trackers.map((tracker, t) => {
    const fit = benchFit(tracker)
    const own = readings.filter(({ reading }) => reading.tracker === tracker.name)
    const volts = voltsOf(car, tracker, own, budget)
    const { maxW } = tracker.window
    const inputW = Array.from({ length: POINTS }, (_, i) => (maxW * (i + 1)) / POINTS)
    return {
      name: tracker.name,
      maxW,
      ...volts,
      inputW,
      bench: curveOf(before, t, volts, inputW),
      learned: curveOf(after, t, volts, inputW),
      terms: TERMS.map((name) => termOf(before, after, t, name)),
      benchTold: fit === null ? null : toldText(fit.told),
      readings: own,
      day: budget === null ? null : dayOf(tracker.name, budget),
    }
  })
}

/** Where its readings were taken, else where the day's energy fell, else where it usually works. */
function voltsOf(
  car: CarDocument,
  tracker: CarDocument['trackers'][number],
  own: KeptReading[],
  budget: ReportInput['day'],
) {
  const usual = usualVolts(car, tracker)
  const mean = (of: (kept: KeptReading) => number): number => own.reduce((sum, r) => sum + of(r), 0) / own.length
  if (own.length > 0) return { inputV: mean((r) => r.reading.inputV), outputV: mean((r) => r.reading.outputV) }
  const inputV = budget?.trackers.find(({ name }) => name === tracker.name)?.meanInputV ?? 0
  return inputV > 0 ? { ...usual, inputV } : usual
}

function curveOf(belief: Belief, t: number, volts: { inputV: number; outputV: number }, inputW: number[]) {
  const { efficiency, low, high } = efficiencyBand(belief.trackers[t], volts, inputW, coverageFactor(belief))
  const pct = (values: Float64Array): number[] => Array.from(values, (value) => value * 100)
  return { efficiencyPct: pct(efficiency), lowPct: pct(low), highPct: pct(high) }
}

function termOf(before: Belief, after: Belief, t: number, of: Term): TrackerReport['terms'][number] {
  const { name, unit, scale } = TERM_NAMES[of]
  const [bench, held] = [before.trackers[t], after.trackers[t]]
  return {
    name,
    unit,
    value: held.losses[of] * scale,
    sd: held.sd[of] * scale,
    benchValue: bench.losses[of] * scale,
    benchSd: bench.sd[of] * scale,
    isIdentified: held.isIdentified[of],
  }
}

function dayOf(name: string, { date, trackers }: NonNullable<ReportInput['day']>): TrackerReport['day'] {
  const own = trackers.find((tracker) => tracker.name === name)
  if (own === undefined) return null
  const { inputWh, lossWh, deniedWh, limits, fell } = own
  const allWh = trackers.reduce((sum, tracker) => sum + tracker.inputWh, 0)
  return {
    date,
    wh: inputWh,
    sharePct: allWh > 0 ? (100 * inputWh) / allWh : 0,
    outsideMin: limits.reduce((sum, { limit, minutes }) => sum + (limit === 'full' ? 0 : minutes), 0),
    deniedWh,
    meanEfficiencyPct: inputWh > 0 ? 100 * (1 - lossWh / inputWh) : 0,
    fell,
    onePointWh: inputWh * 0.01,
  }
}
