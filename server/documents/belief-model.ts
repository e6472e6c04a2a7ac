import { openCircuitV } from '../engine/battery.ts'
import { type Belief, learn } from '../engine/belief.ts'
import type { Evidence, MeterPrior, TrackerReading } from '../engine/evidence.ts'
import type { TrackerWindow } from '../engine/tracker.ts'
import { priorFromBench, priorFromTerms, type TrackerPrior, widened } from '../engine/tracker-prior.ts'
import { packModel } from './pack-model.ts'
import { benchPoints, trackerModel, windowModel } from './tracker-model.ts'
import type { CarDocument } from './car.ts'
import type { LearnedLosses } from './learned.ts'
import type { Problem } from './problem.ts'
import { READING_FIELDS, type ReadingDocument, type ReadingField } from './reading.ts'

/** Spread of losses that were given without one. Ours; no source. [%] */
const LOSSES_SPREAD_PCT = 25

/** Class of a meter that nobody named: a plain voltmeter and a clamp. Ours; no source. [%] */
const USUAL_CLASS_PCT = { V: 0.5, A: 1.5 }

const quantityOf = (field: ReadingField): 'V' | 'A' => (field.endsWith('V') ? 'V' : 'A')

/** Standard deviation of a gain that lies anywhere within ±p % alike. */
const gainSdOf = (classPct: number): number => classPct / 100 / Math.sqrt(3)

/** What is known of the trackers of a car before they are read, and its readings in the engine's terms. */
export interface CarEvidence extends Evidence {
  windows: TrackerWindow[]
  meters: MeterPrior[]
  readings: TrackerReading[]
  /** Voltage to which the pack is charged. */
  packFullV: number
}

/**
 * A car's trackers, meters and readings as the engine learns from them.
 *
 * Readings of trackers that the car does not have are passed over; a meter that it does not have, or that was not
 * named, is one of the usual class for that side of that tracker.
 *
 * @param widen  factor on the spread of every bench, at least 1
 */
export function carEvidence(car: CarDocument, readings: readonly ReadingDocument[], widen = 1): CarEvidence {
  const known = (car.meters ?? []).map(({ name, accuracyPct }) => ({ name, gainSd: gainSdOf(accuracyPct) }))
  const meters: MeterPrior[] = [...known]
  const meterOf = (reading: ReadingDocument, field: ReadingField): number => {
    const named = reading.meters?.[field]
    const at = known.findIndex(({ name }) => name === named)
    if (at >= 0) return at
    const name = `${reading.tracker}: ${field}`
    const implied = meters.findIndex((meter, k) => k >= known.length && meter.name === name)
    if (implied >= 0) return implied
    return meters.push({ name, gainSd: gainSdOf(USUAL_CLASS_PCT[quantityOf(field)]) }) - 1
  }
  const indexOf = (name: string): number => car.trackers.findIndex((t) => t.name === name)
  const held = readings.filter(({ tracker }) => indexOf(tracker) >= 0)
  return {
    trackers: car.trackers.map((tracker) => widened(trackerPrior(car, tracker), widen)),
    windows: car.trackers.map(windowModel),
    readings: held.map((reading) => {
      const { id, tracker, inputV, inputA, outputV, outputA } = reading
      const [m, n, o, p] = READING_FIELDS.map((field) => meterOf(reading, field))
      const of = { inputV: m, inputA: n, outputV: o, outputA: p }
      return { id, tracker: indexOf(tracker), inputV, inputA, outputV, outputA, meters: of }
    }),
    meters,
    packFullV: car.pack.cellMaxV * car.pack.seriesCells,
  }
}

/** A tracker before it is read: its bench, or the losses given with their spread. */
function trackerPrior(car: CarDocument, tracker: CarDocument['trackers'][number]): TrackerPrior {
  const { name, bench, window, lossesSpreadPct = LOSSES_SPREAD_PCT } = tracker
  if (bench !== undefined) return priorFromBench(name, benchPoints(tracker), window.maxW)
  const full = { W: window.maxW, ...usualVolts(car, tracker) }
  return priorFromTerms(name, trackerModel(tracker).losses, lossesSpreadPct / 100, full)
}

/** Voltage of a silicon cell at its best power, roughly; only places curves. Common practice, no source. */
const CELL_V = 0.58

/** Where a tracker works on a usual day: its string at its best, the pack half full. [V] */
export function usualVolts(car: CarDocument, tracker: CarDocument['trackers'][number]) {
  const outputV = openCircuitV(packModel(car.pack), 0.5)
  const string = car.strings.find((s) => [s.tracker, ...s.alsoTrackers].includes(tracker.name))
  const cells = string?.cells.reduce((sum, group) => sum + group.inSeries, 0) ?? 0
  const { inputMinV, inputMaxV } = tracker.window
  const inputV = Math.min(Math.max(CELL_V * cells, inputMinV, 1), inputMaxV, 0.95 * outputV)
  return { inputV, outputV }
}

/** What is held of the trackers after readings that count. */
export const carBelief = (car: CarDocument, counting: readonly ReadingDocument[], widen = 1): Belief =>
  learn(carEvidence(car, counting, widen))

/** Losses of those trackers that readings tell of, by name; none where there are no readings. */
export function learnedOf(car: CarDocument, counting: readonly ReadingDocument[], widen = 1): LearnedLosses {
  const read = new Set(counting.map(({ tracker }) => tracker))
  if (read.size === 0) return {}
  const { trackers } = carBelief(car, counting, widen)
  return Object.fromEntries(trackers.filter(({ name }) => read.has(name)).map(({ name, losses }) => [name, losses]))
}

/** What a reading names that the car does not have. */
export function strangers(car: CarDocument, reading: ReadingDocument): Problem[] {
  const oneOf = (names: string[], what: string): string =>
    names.length === 0 ? `the car has no ${what}` : `one of ${names.map((name) => JSON.stringify(name)).join(', ')}`
  const trackers = car.trackers.map(({ name }) => name)
  const problems: Problem[] = []
  if (!trackers.includes(reading.tracker)) {
    problems.push({ field: 'tracker', value: JSON.stringify(reading.tracker), detail: oneOf(trackers, 'tracker') })
  }
  for (const field of READING_FIELDS) {
    const name = reading.meters?.[field]
    const fitting = (car.meters ?? []).filter(({ measures }) => measures === quantityOf(field)).map((m) => m.name)
    if (name === undefined || fitting.includes(name)) continue
    const detail = oneOf(fitting, `meter of ${quantityOf(field) === 'V' ? 'volts' : 'amps'}`)
    problems.push({ field: `meters.${field}`, value: JSON.stringify(name), detail })
  }
  return problems
}
