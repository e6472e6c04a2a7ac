import type { DayBudget } from '../../server/documents/budget.ts'
import type { HereDocument } from '../../server/documents/here.ts'
import { clockAt, zoneOffsetMin } from '../format.ts'

/** Where the car is, as it is typed. */
export interface HereForm {
  stage: string
  km: string
  /** HH:MM, local time of the day. */
  time: string
  chargePct: string
  speedKmh: string
  /** What is left of the stop that the car stands at; empty on the road. [min] */
  stopLeftMin: string
}

export type HereField = keyof HereForm

const NOTHING: HereForm = { stage: '', km: '', time: '', chargePct: '', speedKmh: '0', stopLeftMin: '' }

/** A car nearer than this to the end of a stage stands on it. [km] */
const AT_END_KM = 0.05

const fixed = (value: number, digits: number): string => String(Number(value.toFixed(digits)))

/**
 * Where the car is by a budget, or as it sets off where the day is not now; what the budget cannot tell is left empty.
 *
 * @param stages  stages that start on the day; on one begun earlier the place from its start is not known
 */
export function hereBy(day: DayBudget, stages: { id: string }[], nowMs: number): HereForm {
  const { series, spans } = day
  const drives = spans.filter((span) => span.kind === 'drive')
  if (drives.length === 0) return NOTHING
  const [firstMs, lastMs] = [Date.parse(drives[0].from), Date.parse(drives[drives.length - 1].to)]
  const atMs = nowMs >= firstMs && nowMs <= lastMs ? nowMs : firstMs
  const i = series.toMs.findIndex((toMs) => toMs > atMs)
  if (i < 0) return NOTHING
  const share = (atMs - series.fromMs[i]) / (series.toMs[i] - series.fromMs[i])
  const between = (column: number[], before: number): number =>
    column[i] * share + (i > 0 ? column[i - 1] : before) * (1 - share)
  const km = between(series.km, 0)
  const leg = day.stages.find(({ toKm }) => km <= toKm + AT_END_KM / 10) ?? day.stages[day.stages.length - 1]
  const stop = spans.find(({ kind, from, to }) => kind === 'stop' && Date.parse(from) <= atMs && Date.parse(to) > atMs)
  return {
    stage: leg.id,
    km: stages.some(({ id }) => id === leg.id) ? fixed(Math.max(km - leg.fromKm, 0), 1) : '',
    time: clockAt(Math.floor(atMs / 60_000) * 60_000, day.utcOffsetMin),
    chargePct: fixed(between(series.chargePct, day.opening.chargePct), 1),
    speedKmh: fixed(series.speedKmh[i], 0),
    stopLeftMin: stop === undefined ? '' : fixed((Date.parse(stop.to) - atMs) / 60_000, 0),
  }
}

const typed = (text: string): number => (text.trim() === '' ? Number.NaN : Number(text.replace(',', '.')))

const RANGES: [field: HereField, least: number, most: number, expected: string][] = [
  ['km', 0, 50_000, 'A number from 0.'],
  ['chargePct', 0, 100, 'A number from 0 to 100.'],
  ['speedKmh', 0, 200, 'A number from 0 to 200.'],
]

/** Fields that cannot be read, with what is expected there. */
export function wrongFields(form: HereForm): Partial<Record<HereField, string>> {
  const wrong: Partial<Record<HereField, string>> = {}
  if (form.stage === '') wrong.stage = 'Choose the stage.'
  if (!/^\d\d:\d\d/.test(form.time)) wrong.time = 'A time of day.'
  for (const [field, least, most, expected] of RANGES) {
    const value = typed(form[field])
    if (!(value >= least && value <= most)) wrong[field] = expected
  }
  const left = form.stopLeftMin.trim() === '' ? 0 : typed(form.stopLeftMin)
  if (!(left >= 0 && left <= 600)) wrong.stopLeftMin = 'A number from 0 to 600.'
  return wrong
}

/** The instant of a local time in a zone. [ms since 1970, UTC] */
function instantMs(date: string, time: string, zone: string): number {
  const wallMs = Date.parse(`${date}T${time.slice(0, 5)}:00Z`)
  const firstMs = wallMs - zoneOffsetMin(zone, wallMs) * 60_000
  return wallMs - zoneOffsetMin(zone, firstMs) * 60_000
}

/** The form as the service and the phone's worker take it; null where a field cannot be read. */
export function hereOf(form: HereForm, { date, zone }: { date: string; zone: string }): HereDocument | null {
  if (Object.keys(wrongFields(form)).length > 0) return null
  return {
    at: new Date(instantMs(date, form.time, zone)).toISOString(),
    stage: form.stage,
    km: typed(form.km),
    chargePct: typed(form.chargePct),
    speedKmh: typed(form.speedKmh),
    ...(form.stopLeftMin.trim() === '' ? {} : { stopLeftMin: typed(form.stopLeftMin) }),
  }
}
