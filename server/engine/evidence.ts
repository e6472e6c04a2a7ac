import { InputError } from './input-error.ts'
import { lossFactors, TERMS } from './loss-terms.ts'
import { type TrackerPrior } from './tracker-prior.ts'

/** A meter, known to within a share of what it shows. */
export interface MeterPrior {
  name: string
  /** Standard deviation of its gain, a fraction; a class of ±p % evenly likely is p/100/√3. */
  gainSd: number
}

/** Index of the meter that showed each number; −1 is one without error, so prefer to name a meter. */
export interface ReadingMeters {
  inputV: number
  inputA: number
  outputV: number
  outputA: number
}

/** Four numbers read off a tracker. */
export interface TrackerReading {
  id: string
  /** Index among the trackers. */
  tracker: number
  inputV: number
  inputA: number
  outputV: number
  outputA: number
  meters: ReadingMeters
}

/** Trackers and meters as they were before any reading, and the readings that count. */
export interface Evidence {
  trackers: readonly TrackerPrior[]
  meters: readonly MeterPrior[]
  readings: readonly TrackerReading[]
}

/** Power that a reading shows as lost. */
export const lostW = ({ inputV, inputA, outputV, outputA }: TrackerReading): number =>
  inputV * inputA - outputV * outputA

/**
 * What each unknown is multiplied by in a reading, as shares of the tracker's reference power: four terms a
 * tracker, then the gains.
 */
export function shareRow({ trackers, meters }: Pick<Evidence, 'trackers' | 'meters'>, reading: TrackerReading) {
  const { inputV, inputA, outputV, outputA, tracker } = reading
  const from = trackers.length * TERMS.length
  const row = new Float64Array(from + meters.length)
  const { referenceW } = trackers[tracker]
  for (const [j, factor] of lossFactors(inputA, outputV, outputA).entries()) {
    row[tracker * TERMS.length + j] = factor / referenceW
  }
  const add = (meter: number, powerW: number): void => {
    if (meter >= 0) row[from + meter] += powerW / referenceW
  }
  add(reading.meters.inputV, inputV * inputA)
  add(reading.meters.inputA, inputV * inputA)
  add(reading.meters.outputV, -outputV * outputA)
  add(reading.meters.outputA, -outputV * outputA)
  return row
}

/**
 * Refuses priors and readings that cannot be learned from.
 *
 * @throws InputError naming the field
 */
export function checkEvidence({ trackers, meters, readings }: Evidence): void {
  for (const [t, { losses, covariance, referenceW }] of trackers.entries()) {
    check(`trackers[${t}].referenceW`, referenceW, referenceW > 0 && referenceW < Infinity, 'a number above 0')
    for (const term of TERMS) {
      const value = losses[term]
      check(`trackers[${t}].losses.${term}`, value, value >= 0 && value < Infinity, 'a number of at least 0')
    }
    check(`trackers[${t}].covariance`, covariance.size, covariance.size === TERMS.length, 'four rows')
  }
  for (const [k, { gainSd }] of meters.entries()) {
    check(`meters[${k}].gainSd`, gainSd, gainSd > 0 && gainSd < 1, 'above 0 and below 1')
  }
  for (const [n, reading] of readings.entries()) {
    checkReading(reading, trackers.length, meters.length, `readings[${n}]`)
  }
}

/**
 * Refuses a reading that no tracker could show, or that names a tracker or meter that is not there.
 *
 * @throws InputError naming the field
 */
export function checkReading(reading: TrackerReading, trackers: number, meters: number, field = 'reading'): void {
  const isIndex = (value: number, least: number, count: number): boolean =>
    Number.isInteger(value) && value >= least && value < count
  check(`${field}.tracker`, reading.tracker, isIndex(reading.tracker, 0, trackers), `an index of ${trackers} trackers`)
  for (const name of ['inputV', 'inputA', 'outputV', 'outputA'] as const) {
    const value = reading[name]
    check(`${field}.${name}`, value, value > 0 && value < Infinity, 'a number above 0')
    const meter = reading.meters[name]
    check(`${field}.meters.${name}`, meter, isIndex(meter, -1, meters), `−1 or an index of ${meters} meters`)
  }
}

function check(field: string, value: number, isGood: boolean, wanted: string): void {
  if (!isGood) throw new InputError('out-of-range', field, `${value} given, ${wanted} expected`)
}
