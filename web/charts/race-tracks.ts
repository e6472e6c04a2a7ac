import { scaleLinear } from 'd3-scale'
import { line } from 'd3-shape'
import type { RacePlanDay, RacePlanDocument } from '../race-types.ts'

/** Height of the battery's plot, and of a night between two days. [px] */
export const RACE = { battery: 156, nightPx: 20, leastDayPx: 66 }

type Point = [number, number]
type Series = NonNullable<RacePlanDay['series']>

const path = line()
const round = (value: number): number => Math.round(value * 10) / 10

/** Where a day stands in the chart. */
export interface DayStrip {
  day: RacePlanDay
  /** Left and right edge; the night follows. [px] */
  fromX: number
  toX: number
  x: (atMs: number) => number
}

/** Days side by side, as wide as they are long, with a folded night behind each; wider than the room where they are many. */
export function dayStrips({ days }: RacePlanDocument, room: number): { strips: DayStrip[]; width: number } {
  const lengths = days.map(({ series }) => lengthMs(series))
  const known = lengths.filter((ms) => ms > 0)
  const usualMs = known.length === 0 ? 1 : Math.max(...known)
  const shares = lengths.map((ms) => (ms > 0 ? ms : usualMs))
  const total = shares.reduce((sum, ms) => sum + ms, 0)
  const nights = days.length * RACE.nightPx
  const least = RACE.leastDayPx * days.length + nights
  const width = Math.max(room, least)
  let left = 0
  const strips = days.map((day, d) => {
    const fromX = round(left)
    const toX = round(left + ((width - nights) * shares[d]) / total)
    left = toX + RACE.nightPx
    const first = day.series?.atMs[0] ?? 0
    const last = first + shares[d]
    const scale = scaleLinear().domain([first, last]).range([fromX, toX]).clamp(true)
    return { day, fromX, toX, x: (atMs: number) => round(scale(atMs)) }
  })
  return { strips, width }
}

const lengthMs = (series: Series | null): number =>
  series === null ? 0 : series.atMs[series.atMs.length - 1] - series.atMs[0]

/** Usable energy to its height: an empty pack at the bottom, a full one at the top. */
export const raceEnergyY = (capacityWh: number, top: number): ((wh: number) => number) => {
  const scale = scaleLinear()
    .domain([0, capacityWh])
    .range([top + RACE.battery, top])
    .clamp(true)
  return (wh) => round(scale(wh))
}

/** The battery through all days that have one, over each night straight on. */
export function raceBattery(strips: DayStrip[], y: (wh: number) => number): string {
  const runs: Point[][] = [[]]
  for (const { day, x, toX } of strips) {
    if (day.series === null) {
      runs.push([])
      continue
    }
    const { atMs, wh } = day.series
    const run = runs[runs.length - 1]
    atMs.forEach((ms, i) => run.push([x(ms), y(wh[i])]))
    run.push([toX + RACE.nightPx, y(wh[wh.length - 1])])
  }
  return runs.map((run) => path(run) ?? '').join('')
}

/** What a day closes with, where it stands, and its likely range. */
export interface CloseMark {
  day: RacePlanDay
  x: number
  y: number
  range: { lowY: number; highY: number } | null
}

export const closeMarks = (strips: DayStrip[], y: (wh: number) => number): CloseMark[] =>
  strips.flatMap(({ day, toX }) => {
    const { closing } = day.close
    if (closing === null) return []
    const range = day.ranges === null ? null : { lowY: y(day.ranges.closingWh.p10), highY: y(day.ranges.closingWh.p90) }
    return [{ day, x: toX + RACE.nightPx / 2, y: y(closing.wh), range }]
  })
