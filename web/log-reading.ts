import type { CarDocument } from '../server/documents/car.ts'
import type { Curve, Moved, ReadingDocument, ReadingField, TrackerReport, Trackers } from './crew-types.ts'
import { grouped, signed, THIN } from './format.ts'

export type Meter = NonNullable<CarDocument['meters']>[number]

export type Meters = Partial<Record<ReadingField, string>>
export type Typed = Record<ReadingField, string>

export const FIELDS = ['inputV', 'inputA', 'outputV', 'outputA'] as const
export const NOTHING_TYPED: Typed = { inputV: '', inputA: '', outputV: '', outputA: '' }

/** What the screen needs of a car. */
export interface LogCar {
  trackers: string[]
  meters: Meter[]
}

export const logCar = (car: Pick<CarDocument, 'trackers' | 'meters'>): LogCar => ({
  trackers: car.trackers.map(({ name }) => name),
  meters: car.meters ?? [],
})

/** Class that the service takes for a meter that nobody named. [%] */
export const USUAL_CLASS_PCT = { V: 0.5, A: 1.5 }

const MOST = { V: 1000, A: 200 }

/** A typed figure above 0 and within what meters show, or null while it is none. */
export function figure(text: string, unit: 'V' | 'A'): number | null {
  const plain = text.trim().replace(',', '.')
  const value = /^\d{1,4}(\.\d{0,4})?$|^\.\d{1,4}$/.test(plain) ? Number(plain) : 0
  return value > 0 && value <= MOST[unit] ? value : null
}

export const unitOf = (field: ReadingField): 'V' | 'A' => (field.endsWith('V') ? 'V' : 'A')

export type Figures = Record<ReadingField, number>

/** All four figures, or null while one of them is missing. */
export function figuresOf(typed: Typed): Figures | null {
  const [inputV, inputA, outputV, outputA] = FIELDS.map((field) => figure(typed[field], unitOf(field)))
  if (inputV === null || inputA === null || outputV === null || outputA === null) return null
  return { inputV, inputA, outputV, outputA }
}

/** What the four figures say by themselves: powers, efficiency, and its standard uncertainty by the meters. */
export interface Shown {
  inputW: number
  outputW: number
  efficiencyPct: number
  uncertaintyPct: number
}

/**
 * Power out over power in, with what the meters' classes leave open.
 *
 * A class of p % is taken as a rectangle, so its standard uncertainty is p/√3; a meter at both sides cancels.
 *
 * @source JCGM 100:2008, 4.3.7 and 5.1.6
 */
export function shownBy(figures: Figures, chosen: Meters, meters: Meter[]): Shown {
  const inputW = figures.inputV * figures.inputA
  const outputW = figures.outputV * figures.outputA
  const efficiencyPct = (100 * outputW) / inputW
  const named = meters.reduce((sum, meter) => {
    const sign = FIELDS.reduce((count, field) => count + (chosen[field] === meter.name ? side(field) : 0), 0)
    return sum + ((sign * meter.accuracyPct) / 100) ** 2 / 3
  }, 0)
  const unnamed = FIELDS.filter((field) => !meters.some((meter) => meter.name === chosen[field]))
  const square = unnamed.reduce((sum, field) => sum + (USUAL_CLASS_PCT[unitOf(field)] / 100) ** 2 / 3, named)
  return { inputW, outputW, efficiencyPct, uncertaintyPct: efficiencyPct * Math.sqrt(square) }
}

const side = (field: ReadingField): number => (field.startsWith('input') ? -1 : 1)

export interface CurvePoint {
  efficiencyPct: number
  lowPct: number
  highPct: number
}

export const curveInUse = (report: TrackerReport, uses: Trackers['uses']): Curve =>
  uses === 'bench' ? report.bench : report.learned

/** The curve at an input power, straight between its points; null outside them. */
export function curveAt(inputW: number[], curve: Curve, atW: number): CurvePoint | null {
  const i = inputW.findIndex((w) => w >= atW)
  if (i < 0 || (i === 0 && inputW[0] > atW)) return null
  const share = i === 0 ? 1 : (atW - inputW[i - 1]) / (inputW[i] - inputW[i - 1])
  const between = (column: number[]): number =>
    i === 0 ? column[0] : column[i - 1] + (column[i] - column[i - 1]) * share
  return {
    efficiencyPct: between(curve.efficiencyPct),
    lowPct: between(curve.lowPct),
    highPct: between(curve.highPct),
  }
}

export type Glance = { kind: 'impossible' | 'fits' | 'alone' } | { kind: 'under' | 'over'; points: number }

/** First sight of a reading while it is typed; the service has the last word. */
export function glanceAt({ efficiencyPct, uncertaintyPct }: Shown, at: CurvePoint | null): Glance {
  if (efficiencyPct - 100 > 2 * uncertaintyPct) return { kind: 'impossible' }
  if (at === null) return { kind: 'alone' }
  const off = efficiencyPct - at.efficiencyPct
  const band = off < 0 ? at.efficiencyPct - at.lowPct : at.highPct - at.efficiencyPct
  if (Math.abs(off) <= Math.hypot(2 * uncertaintyPct, band)) return { kind: 'fits' }
  return { kind: off < 0 ? 'under' : 'over', points: Math.abs(off) }
}

/** The meters with the clamps changed over, as they are for the second reading of a pair. */
export const swapped = (meters: Meters): Meters => ({
  ...meters,
  inputA: meters.outputA,
  outputA: meters.inputA,
})

/** A meter for each figure: the one remembered while the car has it, else the first that measures it. */
export function metersFor(remembered: Meters, meters: Meter[]): Meters {
  const chosen: Meters = {}
  for (const field of FIELDS) {
    const able = meters.filter((meter) => meter.measures === unitOf(field))
    const name = able.some((meter) => meter.name === remembered[field]) ? remembered[field] : spare(able, field)
    if (name !== undefined) chosen[field] = name
  }
  return chosen
}

/** The first meter at the input, the second at the output where there are two. */
const spare = (able: Meter[], field: ReadingField): string | undefined =>
  (field.startsWith('input') ? able[0] : (able[1] ?? able[0]))?.name

export const readingOf = (
  figures: Figures,
  tracker: string,
  meters: Meters,
  [id, at]: [id: string, at: string],
): ReadingDocument => ({ id, tracker, at, ...figures, ...(Object.keys(meters).length === 0 ? {} : { meters }) })

/** A random identifier; browsers offer their own only over HTTPS. RFC 9562, version 4. */
export function newId(random: Uint8Array = crypto.getRandomValues(new Uint8Array(16))): string {
  const bytes = Uint8Array.from(random)
  bytes[6] = (bytes[6] & 0x0f) | 0x40
  bytes[8] = (bytes[8] & 0x3f) | 0x80
  const hex = Array.from(bytes, (byte) => byte.toString(16).padStart(2, '0')).join('')
  return hex.replace(/^(.{8})(.{4})(.{4})(.{4})/, '$1-$2-$3-$4-')
}

/** One decimal of a percentage. */
export const pct1 = (value: number): string => value.toFixed(1).replace('-', '\u2212')

/** What a day moved by, to the watt hour: the account of one reading is finer than a forecast. */
export function movedText({ movedWh, closingWhAfter, pointsPct }: Moved): string {
  const by = Math.round(movedWh) === 0 ? `less than 1${THIN}Wh` : `${signed(movedWh)}${THIN}Wh`
  const points = Object.entries(pointsPct)
    .filter(([, value]) => Math.abs(value) >= 0.05)
    .map(([name, value]) => `; ${name} ${value > 0 ? '+' : ''}${pct1(value)} points`)
  return `Moves the close by ${by} to ${grouped(closingWhAfter)}${THIN}Wh${points.join('')}.`
}
