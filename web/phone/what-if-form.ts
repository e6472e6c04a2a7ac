import type { ChangeDocument, WhatIfDocument } from '../../server/documents/what-if.ts'
import { clock, durationText, grouped, signed, THIN, whText } from '../format.ts'

type Numbers = { [K in keyof ChangeDocument as ChangeDocument[K] extends number | undefined ? K : never]?: number }

/** One thing that may be otherwise, and how far. */
export interface Slider {
  field: keyof Numbers
  label: string
  least: number
  most: number
  step: number
  /** Where nothing is otherwise. */
  still: number
  unit: string
  /** Whether the value is added to what is planned, so that its sign is shown. */
  isAdded: boolean
}

const share = (field: keyof Numbers, label: string, least: number, most: number): Slider => ({
  field,
  label,
  least,
  most,
  step: 1,
  still: 100,
  unit: '%',
  isAdded: false,
})
const added = (field: keyof Numbers, label: string, unit: string, span: [number, number, number]): Slider => {
  const [least, most, step] = span
  return { field, label, least, most, step, still: 0, unit, isAdded: true }
}

/** What the screen lets people move. */
export const SLIDERS: Slider[] = [
  share('sunPct', 'Sun, of the forecast', 40, 130),
  added('headwindMps', 'Headwind', 'm/s', [-8, 8, 0.5]),
  added('openingPct', 'Charge', '% of charge', [-20, 20, 1]),
  added('closePct', 'Wanted at the close', '% of charge', [-20, 20, 1]),
  added('stopMinutes', 'Each stop', 'min', [-10, 60, 1]),
  share('rollingPct', 'Rolling', 80, 150),
  share('dragAreaPct', 'Drag', 80, 150),
  added('massKg', 'Mass', 'kg', [-20, 60, 1]),
]

/** What the sliders stand at; those that stand still are left out. */
export type Moved = Numbers

/** A slider's figure with its unit: 92 %, +2.5 m/s. */
export function sliderText({ still, unit, isAdded }: Slider, value: number): string {
  if (!isAdded) return `${grouped(value)}${THIN}${unit}`
  if (value === still) return `as planned`
  const text = Number.isInteger(value) ? signed(value) : `${value > 0 ? '+' : '\u2212'}${Math.abs(value).toFixed(1)}`
  return `${text}${THIN}${unit}`
}

/** The sliders after one of them was moved. */
export function movedTo(moved: Moved, { field, still }: Slider, value: number): Moved {
  const { [field]: _before, ...others } = moved
  return value === still ? others : { ...others, [field]: value }
}

/** What the changes do, in one sentence. */
export function whatIfText({ base, text, variants }: WhatIfDocument): string {
  if (base === null) return text
  const [answer] = variants
  if (answer === undefined || answer.laterMin === null || answer.arriveAt === null || answer.closingWh === null) {
    const lacksWh = answer?.lacksWh ?? 0
    return lacksWh < 0.5
      ? 'So the day’s road is not finished within its hours.'
      : `So reserve or target is missed: at least ${whText(lacksWh)}${THIN}Wh are lacking.`
  }
  const minutes = Math.abs(answer.laterMin)
  const than = minutes < 0.5 ? 'as without it' : `${durationText(minutes)} ${answer.laterMin > 0 ? 'later' : 'earlier'}`
  return `Arrive ${clock(answer.arriveAt)}, ${than}; close with ${whText(answer.closingWh)}${THIN}Wh.`
}
