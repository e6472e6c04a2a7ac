import { scaleLinear } from 'd3-scale'
import { area, curveStepAfter, line } from 'd3-shape'
import type { DayBudget } from '../../server/documents/budget.ts'
import type { PlanDocument, Planned } from '../plan-types.ts'
import { mergedSections } from '../plan-words.ts'
import type { Axis } from './axis.ts'

/** Heights of the tracks from the top of the plot. [px] */
export const TRACKS = { battery: 176, speedTop: 208, speedBase: 272, road: 318, foot: 344 }

type Point = [number, number]
type Ranges = NonNullable<PlanDocument['ranges']>

const path = line()
const steps = line().curve(curveStepAfter)
const round = (value: number): number => Math.round(value * 10) / 10

/** Usable energy to its height: an empty pack at the bottom, a full one at the top. */
export const energyY = (capacityWh: number, top: number): ((wh: number) => number) =>
  scaleLinear()
    .domain([0, capacityWh])
    .range([top + TRACKS.battery, top])
    .clamp(true)

/** Planned battery from the day's opening to its close. */
export function batteryPath({ series, opening, capacityWh }: DayBudget, axis: Axis, top: number): string {
  const y = energyY(capacityWh, top)
  const points: Point[] = [[round(axis.x(series.fromMs[0])), round(y(opening.wh))]]
  series.toMs.forEach((atMs, i) => points.push([round(axis.x(atMs)), round(y(series.wh[i]))]))
  return path(points) ?? ''
}

/** The likely range at an instant. [Wh] */
export interface FanPoint {
  atMs: number
  lowWh: number
  highWh: number
}

/**
 * The likely range along the day, from the first gate to the close.
 *
 * Between gates the distance from the plan is drawn straight, so that the range follows what the plan charges at a stop.
 */
export function fanPoints({ forPeople, ranges }: Planned): FanPoint[] {
  if (ranges === null || ranges.gates.length === 0) return []
  const { series, closing } = forPeople.budget
  const known = knownSpreads(ranges, closing.wh, series.toMs[series.toMs.length - 1])
  const low = spreadScale(known, ({ low: wh }) => wh)
  const high = spreadScale(known, ({ high: wh }) => wh)
  const [from] = known
  const points: FanPoint[] = []
  series.toMs.forEach((atMs, i) => {
    if (atMs >= from.atMs) points.push({ atMs, lowWh: series.wh[i] + low(atMs), highWh: series.wh[i] + high(atMs) })
  })
  return points
}

interface Spread {
  atMs: number
  low: number
  high: number
}

const knownSpreads = ({ gates, closingWh }: Ranges, plannedWh: number, closeMs: number): Spread[] => [
  ...gates.map((gate) => ({
    atMs: Date.parse(gate.at),
    low: gate.wh.p10 - gate.plannedWh,
    high: gate.wh.p90 - gate.plannedWh,
  })),
  { atMs: closeMs, low: closingWh.p10 - plannedWh, high: closingWh.p90 - plannedWh },
]

const spreadScale = (known: Spread[], of: (spread: Spread) => number): ((atMs: number) => number) =>
  scaleLinear()
    .domain(known.map(({ atMs }) => atMs))
    .range(known.map(of))
    .clamp(true)

/** The fan's area and its two edges. */
export function fanPaths(points: FanPoint[], axis: Axis, y: (wh: number) => number): { fill: string; edges: string } {
  const at = points.map(({ atMs, lowWh, highWh }) => ({
    x: round(axis.x(atMs)),
    low: round(y(lowWh)),
    high: round(y(highWh)),
  }))
  const fill = area<(typeof at)[number]>()
    .x(({ x }) => x)
    .y0(({ low }) => low)
    .y1(({ high }) => high)
  const edge = (of: (point: (typeof at)[number]) => number): string =>
    path(at.map((point): Point => [point.x, of(point)])) ?? ''
  return { fill: fill(at) ?? '', edges: edge(({ low }) => low) + edge(({ high }) => high) }
}

/** Held speed and posted limit on one drive. */
export interface DriveSpeeds {
  fromMs: number
  toMs: number
  at: { fromMs: number; heldKmh: number; limitKmh: number }[]
}

/** What is held on each drive: the section's speed, or the limit where that is lower. */
export function driveSpeeds({ forPeople: { budget, sections } }: Planned): DriveSpeeds[] {
  const { series } = budget
  return budget.spans
    .filter(({ kind }) => kind === 'drive')
    .map((span) => {
      const [fromMs, toMs] = [Date.parse(span.from), Date.parse(span.to)]
      const at: DriveSpeeds['at'] = []
      series.fromMs.forEach((stepMs, i) => {
        if (stepMs < fromMs || stepMs >= toMs || series.limitKmh[i] <= 0) return
        const km = series.km[i]
        const section =
          sections.find((one) => km > one.fromKm && km <= one.toKm + 1e-6) ?? sections[sections.length - 1]
        at.push({
          fromMs: stepMs,
          heldKmh: Math.min(section.speedKmh, series.limitKmh[i]),
          limitKmh: series.limitKmh[i],
        })
      })
      return { fromMs, toMs, at }
    })
    .filter(({ at }) => at.length > 0)
}

/** Speeds that the track spans: from under the slowest held to a little over the fastest. [km/h] */
export function speedSpan(drives: DriveSpeeds[]): { lowKmh: number; highKmh: number } {
  const held = drives.flatMap(({ at }) => at.map(({ heldKmh }) => heldKmh))
  const most = Math.max(...held)
  const limits = drives.flatMap(({ at }) => at.map(({ limitKmh }) => limitKmh))
  const top = Math.min(Math.max(...limits), most + 30)
  return {
    lowKmh: Math.max(Math.floor((Math.min(...held) - 15) / 10) * 10, 0),
    highKmh: Math.ceil((top + 5) / 10) * 10,
  }
}

export const speedY = (
  { lowKmh, highKmh }: { lowKmh: number; highKmh: number },
  top: number,
): ((kmh: number) => number) =>
  scaleLinear()
    .domain([lowKmh, highKmh])
    .range([top + TRACKS.speedBase, top + TRACKS.speedTop])
    .clamp(true)

/** Held speed as steps that stand on the track's foot, and what lies over the limit. */
export function speedPaths(
  drive: DriveSpeeds,
  axis: Axis,
  y: (kmh: number) => number,
  top: number,
): { held: string; over: string } {
  const base = top + TRACKS.speedBase
  const roof = top + TRACKS.speedTop
  const [from, to] = [round(axis.x(drive.fromMs)), round(axis.x(drive.toMs))]
  const held = drive.at.map(({ fromMs, heldKmh }): Point => [round(axis.x(fromMs)), round(y(heldKmh))])
  const limit = drive.at.map(({ fromMs, limitKmh }): Point => [round(axis.x(fromMs)), round(y(limitKmh))])
  const last = (points: Point[]): Point => [to, points[points.length - 1][1]]
  const rest = (steps([...limit, last(limit)]) ?? '').replace(/^M/, 'L')
  return {
    held: `M${from},${base}${(steps([...held, last(held)]) ?? '').replace(/^M/, 'L')}V${base}`,
    over: `M${from},${roof}${rest}V${roof}Z`,
  }
}

export interface SpeedLabel {
  x: number
  y: number
  text: string
}

/** The speed of each merged section that has room for it. */
export function speedLabels(plan: Planned, axis: Axis, y: (kmh: number) => number): SpeedLabel[] {
  const { budget, sections } = plan.forPeople
  return mergedSections(sections).flatMap(({ fromKm, toKm, speedKmh }) => {
    const [from, to] = [axis.x(leavesMs(budget, fromKm)), axis.x(reachesMs(budget, toKm))]
    if (to - from < 22) return []
    return [{ x: round((from + to) / 2), y: round(y(speedKmh)) + 15, text: String(speedKmh) }]
  })
}

const NEAR_KM = 1e-3

/** When the car comes to a place, and when it leaves it: apart where there is a stop. */
function reachesMs({ series }: DayBudget, km: number): number {
  const i = series.km.findIndex((at) => at >= km - NEAR_KM)
  return series.toMs[i < 0 ? series.toMs.length - 1 : i]
}

function leavesMs({ series }: DayBudget, km: number): number {
  const i = series.km.findLastIndex((at) => at <= km + NEAR_KM)
  return i < 0 ? series.fromMs[0] : series.toMs[i]
}
