import { scaleLinear } from 'd3-scale'
import { area, line } from 'd3-shape'
import type { PartOfDay, TrackerWork } from '../crew-types.ts'
import { clockAt } from '../format.ts'

/** A stretch of a tracker’s path, on axes of its own. */
export interface WindowPlot {
  left: number
  right: number
  /** Bottom of the plot. [px] */
  base: number
  height: number
  /** Where the tracker cannot hold its string: above and below. */
  above: string
  below: string
  pack: string
  string: string
  /** Where the lines’ names stand. [px] */
  packAt: [x: number, y: number]
  stringAt: [x: number, y: number]
  /** Times at an edge. [px] */
  outside: { x: number; width: number }[]
  stops: { x: number; width: number }[]
  voltTicks: { y: number; text: string }[]
  timeTicks: { x: number; text: string }[]
}

interface Room {
  width: number
  work: TrackerWork
  /** The part to show. */
  part: PartOfDay
  utcOffsetMin: number
}

const PLOT_PX = 150
const LEFT_PX = 34
const HOUR_MS = 3_600_000
const MIN_MS = 60_000
/** An edge farther than this from all that was held stays off the plot. [V] */
const NEAR_V = 15
const LEAST_PX = 2
/** Half a time of day, which must not leave the plot. [px] */
const TEXT_PX = 17
/** Room for the bars of times at an edge and their figure. [px] */
const BARS_PX = 24

/** String and pack voltage of a tracker over a part of the day; null where it held nothing. */
export function windowPlot({ width, work, part, utcOffsetMin }: Room): WindowPlot | null {
  const from = Date.parse(part.from)
  const to = Date.parse(part.to)
  const { atMs, inputV, packV, limit } = work.path
  const steps = atMs.flatMap((ms, i) =>
    ms >= from && ms <= to ? [{ ms, packV: packV[i], V: inputV[i], isOut: limit[i] !== '' }] : [],
  )
  const held = steps.filter(({ V }) => V > 0)
  if (held.length < 2) return null
  const [first, last] = [held[0].ms, held[held.length - 1].ms]
  const shown = steps.filter(({ ms }) => ms >= first && ms <= last)
  const x = scaleLinear()
    .domain([first, last])
    .range([LEFT_PX, width - 2])
  const ceiling = (pack: number): number => Math.min(work.highestV, pack - work.leastRiseV)
  const least = Math.min(...held.map(({ V }) => V))
  const most = Math.max(...shown.map((step) => step.packV), ...held.map(({ V }) => V))
  const isLowNear = work.lowestV > least - NEAR_V && work.lowestV > 0
  const y = scaleLinear()
    .domain([(isLowNear ? Math.min(least, work.lowestV) : least) - 4, most + 4])
    .range([shown.some(({ isOut }) => isOut) ? PLOT_PX - BARS_PX : PLOT_PX, 4])
  const along = line<(typeof shown)[number]>().x(({ ms }) => x(ms))
  const shade = area<(typeof shown)[number]>().x(({ ms }) => x(ms))
  const at = (share: number): (typeof held)[number] => held[Math.floor(share * (held.length - 1))]
  const middle = at(0.5)
  return {
    left: LEFT_PX,
    right: width - 2,
    base: PLOT_PX,
    height: PLOT_PX + 24,
    above: shade.y0(0).y1((step) => y(ceiling(step.packV)))(shown) ?? '',
    below: isLowNear ? (shade.y0(PLOT_PX).y1(y(work.lowestV))(shown) ?? '') : '',
    pack: along.y((step) => y(step.packV))(shown) ?? '',
    string: along.defined(({ V }) => V > 0).y(({ V }) => y(V))(shown) ?? '',
    packAt: [x(middle.ms), y(middle.packV) < 20 ? y(middle.packV) + 16 : y(middle.packV) - 7],
    stringAt: [x(middle.ms), y(middle.V) + 16],
    outside: stays(shown, x),
    stops: work.parts.filter(({ kind }) => kind === 'stop').flatMap((stop) => blockOf(stop, x, [first, last])),
    voltTicks: voltTicks(y),
    timeTicks: timeTicks(x, { first, last, width, utcOffsetMin }),
  }
}

/** Times at an edge: from half way to the step before until half way to the step behind. */
function stays(steps: { ms: number; isOut: boolean }[], x: (ms: number) => number): WindowPlot['outside'] {
  const found: { from: number; to: number }[] = []
  steps.forEach(({ ms, isOut }, i) => {
    if (!isOut) return
    const from = i === 0 ? ms : (steps[i - 1].ms + ms) / 2
    const to = i + 1 === steps.length ? ms : (steps[i + 1].ms + ms) / 2
    const before = found[found.length - 1]
    if (before !== undefined && before.to === from) before.to = to
    else found.push({ from, to })
  })
  return found.map(({ from, to }) => ({ x: x(from), width: Math.max(x(to) - x(from), LEAST_PX) }))
}

function voltTicks(y: { (value: number): number; domain(): number[] }): WindowPlot['voltTicks'] {
  const [low, high] = y.domain()
  const every = [2, 5, 10, 20, 50, 100].find((step) => y(low) - y(low + step) >= 26) ?? 200
  const ticks: WindowPlot['voltTicks'] = []
  for (let volts = Math.ceil(low / every) * every; volts <= high; volts += every)
    ticks.push({ y: y(volts), text: String(volts) })
  return ticks
}

function timeTicks(
  x: (ms: number) => number,
  { first, last, width, utcOffsetMin }: { first: number; last: number; width: number; utcOffsetMin: number },
): WindowPlot['timeTicks'] {
  const perMin = (width / (last - first)) * MIN_MS
  const everyMin = [5, 10, 15, 30, 60, 120, 180, 240, 360].find((step) => step * perMin >= 44) ?? 720
  const offsetMs = utcOffsetMin * MIN_MS
  const stepMs = everyMin * MIN_MS
  const ticks: WindowPlot['timeTicks'] = []
  for (let local = Math.ceil((first + offsetMs) / stepMs) * stepMs; local <= last + offsetMs; local += stepMs) {
    const clock = clockAt(local - offsetMs, utcOffsetMin)
    if (x(local - offsetMs) > width - TEXT_PX) break
    ticks.push({ x: x(local - offsetMs), text: stepMs >= HOUR_MS ? clock.slice(0, 2) : clock })
  }
  return ticks
}

/** A part of the day as a block on the axis; none where it lies outside. */
function blockOf(
  part: PartOfDay,
  x: (ms: number) => number,
  [first, last]: readonly [number, number],
): WindowPlot['stops'] {
  const from = Math.max(Date.parse(part.from), first)
  const to = Math.min(Date.parse(part.to), last)
  return to > from ? [{ x: x(from), width: x(to) - x(from) }] : []
}
