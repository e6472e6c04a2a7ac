import { scaleLinear } from 'd3-scale'
import type { DayBudget } from '../../server/documents/budget.ts'
import { clockAt, grouped, THIN } from '../format.ts'

export type AxisMode = 'time' | 'distance'

/** One axis for every track of the band: an instant of the day to a place on the screen and back. */
export interface Axis {
  fromMs: number
  toMs: number
  width: number
  x: (atMs: number) => number
  atMs: (x: number) => number
  ticks: { x: number; text: string }[]
}

interface Block {
  fromMs: number
  toMs: number
  fromKm: number
  toKm: number
  isRoad: boolean
}

const HOUR_MS = 3_600_000
/** Width of still hours on the distance axis, at the ends of the day and between legs, of 358 px. */
const END_BLOCK = 46 / 358
const STOP_BLOCK = 22 / 358
const TICK_ROOM = 42

/** Dawn to dusk: the instants that the band spans. */
export function bandRange(day: DayBudget): { fromMs: number; toMs: number } {
  const { fromMs, toMs } = day.series
  return { fromMs: fromMs[0], toMs: toMs[toMs.length - 1] }
}

/** The band's axis, by time or with the road stretched and still hours folded into fixed blocks. */
export const bandAxis = (day: DayBudget, mode: AxisMode, width: number): Axis =>
  mode === 'time' || !day.spans.some((span) => span.kind === 'drive') ? timeAxis(day, width) : distanceAxis(day, width)

function timeAxis(day: DayBudget, width: number): Axis {
  const { fromMs, toMs } = bandRange(day)
  const scale = scaleLinear().domain([fromMs, toMs]).range([0, width])
  const hours = (toMs - fromMs) / HOUR_MS
  const everyH = [1, 2, 3, 4, 6].find((step) => (width / hours) * step >= TICK_ROOM) ?? 6
  const offsetMs = day.utcOffsetMin * 60_000
  const ticks = []
  const stepMs = everyH * HOUR_MS
  for (let localMs = Math.ceil((fromMs + offsetMs) / stepMs) * stepMs; localMs <= toMs + offsetMs; localMs += stepMs) {
    const atMs = localMs - offsetMs
    ticks.push({ x: scale(atMs), text: clockAt(atMs, day.utcOffsetMin).slice(0, 2) })
  }
  return { fromMs, toMs, width, x: scale, atMs: (x) => scale.invert(x), ticks }
}

/** Still spans of the day folded together, drives kept apart. */
function blocksOf(day: DayBudget): Block[] {
  const blocks: Block[] = []
  for (const span of day.spans) {
    const isRoad = span.kind === 'drive'
    const last = blocks.at(-1)
    const toMs = Date.parse(span.to)
    if (last !== undefined && last.isRoad === isRoad) Object.assign(last, { toMs, toKm: span.toKm })
    else blocks.push({ fromMs: Date.parse(span.from), toMs, fromKm: span.fromKm, toKm: span.toKm, isRoad })
  }
  return blocks
}

function distanceAxis(day: DayBudget, width: number): Axis {
  const blocks = blocksOf(day)
  const stillWidth = (block: Block, i: number): number =>
    block.isRoad ? 0 : width * (i === 0 || i === blocks.length - 1 ? END_BLOCK : STOP_BLOCK)
  const roadKm = blocks.reduce((km, block) => km + (block.isRoad ? block.toKm - block.fromKm : 0), 0)
  const roadWidth = width - blocks.reduce((sum, block, i) => sum + stillWidth(block, i), 0)
  const ms: number[] = []
  const xs: number[] = []
  const kms: { km: number; x: number }[] = []
  let x = 0
  blocks.forEach((block, i) => {
    const perKm = roadKm > 0 ? roadWidth / roadKm : 0
    push(ms, xs, block.fromMs, x)
    if (block.isRoad) {
      roadPoints(day, block).forEach(([atMs, km]) => push(ms, xs, atMs, x + (km - block.fromKm) * perKm))
      kms.push({ km: block.fromKm, x }, { km: block.toKm, x: x + (block.toKm - block.fromKm) * perKm })
      x += (block.toKm - block.fromKm) * perKm
    } else x += stillWidth(block, i)
    push(ms, xs, block.toMs, x)
  })
  const { fromMs, toMs } = bandRange(day)
  const forward = scaleLinear().domain(ms).range(xs).clamp(true)
  return {
    fromMs,
    toMs,
    width,
    x: forward,
    atMs: (at) => inverse(ms, xs, at),
    ticks: distanceTicks(kms, roadKm, roadWidth),
  }
}

/** Points of a piecewise axis; instants only ever grow, so that the way back is known. */
function push(ms: number[], xs: number[], atMs: number, x: number): void {
  if (ms.length > 0 && atMs <= ms[ms.length - 1]) xs[xs.length - 1] = Math.max(xs[xs.length - 1], x)
  else {
    ms.push(atMs)
    xs.push(x)
  }
}

function roadPoints(day: DayBudget, block: Block): [number, number][] {
  const { toMs, km } = day.series
  const points: [number, number][] = []
  toMs.forEach((atMs, i) => {
    if (atMs > block.fromMs && atMs < block.toMs) points.push([atMs, Math.min(km[i], block.toKm)])
  })
  return points
}

function inverse(ms: number[], xs: number[], x: number): number {
  const i = Math.max(
    1,
    xs.findIndex((at) => at >= x),
  )
  const room = xs[i] - xs[i - 1]
  return room <= 0 ? ms[i] : ms[i - 1] + ((x - xs[i - 1]) / room) * (ms[i] - ms[i - 1])
}

function distanceTicks(kms: { km: number; x: number }[], roadKm: number, roadWidth: number): Axis['ticks'] {
  const everyKm = [10, 20, 50, 100, 200, 500].find((step) => (roadWidth / roadKm) * step >= TICK_ROOM) ?? 1000
  const ticks: Axis['ticks'] = []
  for (let i = 0; i < kms.length; i += 2) {
    const [from, to] = [kms[i], kms[i + 1]]
    const perKm = (to.x - from.x) / Math.max(to.km - from.km, 1e-9)
    for (let km = Math.ceil(from.km / everyKm) * everyKm; km <= to.km; km += everyKm)
      ticks.push({ x: from.x + (km - from.km) * perKm, text: grouped(km) })
  }
  if (ticks.length > 0) ticks[ticks.length - 1].text += `${THIN}km`
  return ticks
}
