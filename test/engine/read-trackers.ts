import { learn, type Belief } from '../../server/engine/belief.ts'
import type { MeterPrior, ReadingMeters, TrackerReading } from '../../server/engine/evidence.ts'
import type { Tracker, TrackerLosses, TrackerWindow } from '../../server/engine/tracker.ts'
import { trackerOutputW } from '../../server/engine/tracker-output.ts'
import { priorFromTerms, type TrackerPrior } from '../../server/engine/tracker-prior.ts'

/** Invented trackers for readings, and meters of ±1.5 % (clamps) and ±0.5 % (dividers), evenly likely. */
export const TYPICAL: TrackerLosses = {
  standingW: 0.6,
  switchingFraction: 0.004,
  conductionOhm: 0.05,
  rectifierV: 0.4,
}

export const WINDOW: TrackerWindow = {
  inputMinV: 20,
  inputMaxV: 95,
  inputMaxA: 9,
  outputMinV: 70,
  outputMaxV: 150,
  outputMaxA: 7,
  maxW: 450,
}

export const FULL = { W: 450, inputV: 60, outputV: 110 }

export const priorTracker = (name: string, losses = TYPICAL, spread = 0.25): TrackerPrior =>
  priorFromTerms(name, losses, spread, FULL)

const classSd = (pct: number): number => pct / 100 / Math.sqrt(3)

export const METERS: MeterPrior[] = [
  { name: 'divider left', gainSd: classSd(0.5) },
  { name: 'clamp red', gainSd: classSd(1.5) },
  { name: 'divider right', gainSd: classSd(0.5) },
  { name: 'clamp blue', gainSd: classSd(1.5) },
]

export const PLAIN: ReadingMeters = { inputV: 0, inputA: 1, outputV: 2, outputA: 3 }
export const SWAPPED: ReadingMeters = { inputV: 0, inputA: 3, outputV: 2, outputA: 1 }
export const EXACT: ReadingMeters = { inputV: -1, inputA: -1, outputV: -1, outputA: -1 }

export interface TruePoint {
  inputV: number
  outputV: number
  inputW: number
}

/** What meters with these gains show of a tracker with these losses; scatter on the output. */
export function shown(
  point: TruePoint,
  losses: TrackerLosses,
  {
    id = 'r',
    tracker = 0,
    meters = EXACT,
    gains = [],
    scatterW = 0,
  }: { id?: string; tracker?: number; meters?: ReadingMeters; gains?: readonly number[]; scatterW?: number } = {},
): TrackerReading {
  const truth: Tracker = { name: 'truth', window: WINDOW, losses, trackingEfficiency: 1 }
  const { inputV, outputV, inputW } = point
  const outputW = trackerOutputW(truth, inputW, inputV, outputV) + scatterW
  const by = (meter: number): number => 1 + (meter < 0 ? 0 : gains[meter])
  return {
    id,
    tracker,
    inputV: inputV * by(meters.inputV),
    inputA: (inputW / inputV) * by(meters.inputA),
    outputV: outputV * by(meters.outputV),
    outputA: (outputW / outputV) * by(meters.outputA),
    meters,
  }
}

/** Points over the working range: three voltages in, two out, some powers each. */
export function pointsOver(inputW: readonly number[]): TruePoint[] {
  return [38, 55, 72].flatMap((inputV) =>
    [90, 125].flatMap((outputV) => inputW.map((W) => ({ inputV, outputV, inputW: W }))),
  )
}

/** The belief of one tracker after readings. */
export const believe = (readings: TrackerReading[], trackers = [priorTracker('bow')], meters = METERS): Belief =>
  learn({ trackers, meters, readings })
