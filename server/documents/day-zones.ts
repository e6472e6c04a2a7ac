import type { ForecastDay } from './budget-day.ts'
import { clock, offsetMin } from './local-time.ts'

/** Zones that a span starts and ends in. */
export interface SpanZones {
  start: string
  end: string
}

/**
 * The zone of each span's two ends: the day's until the finish of a stage whose stop is in another; there and on the
 * road from there, that zone, until the next finish.
 */
export function spanZones({ forecast, race, stages, zone }: ForecastDay): SpanZones[] {
  let here = zone
  return forecast.timetable.spans.map(({ kind, stage, toM }) => {
    const isCamp = stages[stage]?.stage.stop !== undefined && race.stages[stage].stop === null
    const finish = isCamp ? here : (stages[stage]?.stage.stop?.zone ?? zone)
    if (kind === 'stop') here = finish
    const start = here
    if (kind === 'drive' && toM >= race.course.stages[stage].toM - 1e-6) here = finish
    return { start, end: here }
  })
}

/** Zone in which a step of the day ends; -1 is the opening. */
export function stepZone(day: ForecastDay, step: number): string {
  const { steps, timetable } = day.forecast
  if (step < 0) return day.zone
  const span = steps.span[step]
  const { start, end } = spanZones(day)[span]
  return steps.toMs[step] >= timetable.spans[span].toMs ? end : start
}

/** A time of day in a zone, which is named where the day's clock shows another: 14:30 (UTC+09:30). */
export function clockThere(day: ForecastDay, atMs: number, zone: string): string {
  const minutes = offsetMin(atMs, zone)
  const text = clock(atMs, zone)
  if (minutes === offsetMin(atMs, day.zone)) return text
  const two = (value: number) => String(value).padStart(2, '0')
  const size = Math.abs(minutes)
  return `${text} (UTC${minutes < 0 ? '-' : '+'}${two(Math.floor(size / 60))}:${two(size % 60)})`
}
