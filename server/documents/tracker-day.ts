import { z } from 'zod'
import type { Car } from '../engine/balance.ts'
import { type DayForecast, daySun, forecastDay } from '../engine/forecast.ts'
import { channelsOf, sharedTracker, type Tracker } from '../engine/tracker.ts'
import { edgeAt, figuresOf, thinnedSteps, weightedEfficiency, WEIGHTS } from '../engine/tracker-figures.ts'
import type { DrivenDay } from './forecast.ts'
import { localIso, offsetMin } from './local-time.ts'
import { placeName } from './budget-day.ts'
import { keptJ, type Price, price, pricedAt } from './time-price.ts'

const WH = 1 / 3600
const wh = (meaning: string) => z.number().describe(`${meaning} [Wh]`)
const pct = (meaning: string) => z.number().nullable().describe(`${meaning}; null where nothing was taken [%]`)
const minutes = (meaning: string) =>
  z.number().nullable().describe(`${meaning}, at the price of a minute; null where there is none [min]`)
const column = (meaning: string) => z.array(z.number()).describe(meaning)

const edge = z.strictObject({
  limit: z.string().describe('name of the edge for machines'),
  label: z.string().describe('what the edge is'),
  effect: z.string().describe('what the tracker does there'),
  minutes: z.number().describe('time at it [min]'),
  deniedWh: wh('of the string’s best that it denied'),
})

/** A part of a day: the whole, a leg, a stop, a time of charging. */
const part = z.strictObject({
  kind: z.enum(['day', 'parked', 'morning-charge', 'drive', 'stop', 'evening-charge']),
  name: z.string(),
  from: z.string().describe('start (ISO 8601, local offset)'),
  to: z.string().describe('end (ISO 8601, local offset)'),
  bestWh: wh('best points of its string, its share of them'),
  inputWh: wh('taken'),
  lossWh: wh('lost of that'),
  takenPct: pct('taken of the best, as static tracking efficiency is reckoned'),
  edges: z.array(edge),
  meanEfficiencyPct: pct('output over input, by this part’s own powers'),
  europeanPct: pct('European weighted efficiency at this part’s mean voltages, all being the highest input power'),
  californianPct: pct('Californian weighted efficiency, likewise'),
  meanInputV: z.number().nullable().describe('mean string voltage by energy [V]'),
  meanPackV: z.number().nullable().describe('mean pack voltage by energy [V]'),
  onePointWh: wh('what one point of efficiency more brings, before the pack'),
  onePointMin: minutes('the same as time'),
})

const path = z
  .strictObject({
    atMs: column('middle of the step [ms since 1970, UTC]'),
    inputV: column('string voltage, 0 at rest [V]'),
    packV: column('pack voltage at its output [V]'),
    inputW: column('taken [W]'),
    limit: z.array(z.string()).describe('edge that bound, or nothing'),
  })
  .describe('at most 200 steps of the day; the first and last of the longest times at an edge are among them')

const oneDay = z.strictObject({
  name: z.string(),
  string: z.string(),
  isDead: z.boolean(),
  ratedW: z.number().describe('highest input power, at which weighted efficiencies are normalised [W]'),
  lowestV: z.number().describe('window: lowest input voltage [V]'),
  highestV: z.number().describe('window: highest input voltage [V]'),
  leastRiseV: z.number().describe('window: least that the pack lies above the string [V]'),
  standbyWh: wh('drawn from the pack while it took nothing'),
  parts: z.array(part).describe('the whole day first, then its parts in order'),
  path,
  ifDead: z
    .strictObject({ wh: wh('less at the close, at the same speeds'), min: minutes('the same as time') })
    .nullable()
    .describe('what it would cost if it died before the day; null where it is dead'),
})

/** Every tracker of a car on one day, and what its energy is worth in time. */
export const trackerDay = z.strictObject({
  date: z.string(),
  zone: z.string(),
  utcOffsetMin: z.number().describe('offset of local time when the day opens [min]'),
  price,
  trackers: z.array(oneDay),
})

export type TrackerDayDocument = z.output<typeof trackerDay>
type Part = z.output<typeof part>
type OneDay = z.output<typeof oneDay>

const MOST_STEPS = 200

const EDGES: Record<string, { label: string; effect: string }> = {
  'input-low': { label: 'below its lowest input voltage', effect: 'string held off its best point' },
  'input-high': { label: 'above its highest input voltage', effect: 'string held off its best point' },
  'cannot-step-down': { label: 'string too near the pack’s voltage', effect: 'string held off its best point' },
  current: { label: 'highest input current', effect: 'current limited' },
  power: { label: 'highest input power', effect: 'power limited' },
  'output-current': { label: 'highest output current', effect: 'current limited' },
  derated: { label: 'hot case', effect: 'power limited' },
  'output-low': { label: 'pack below its lowest output voltage', effect: 'drops out' },
  'output-high': { label: 'pack above its highest output voltage', effect: 'drops out' },
  dead: { label: 'dead', effect: 'drops out' },
  full: { label: 'pack full', effect: 'held back' },
}

/**
 * Every tracker through a day and its parts: where it worked, what its window cost, what a point of efficiency is
 * worth and what its death would cost. Drives the day again for the price of a minute and once a tracker.
 */
export function trackerDayOf(day: DrivenDay): TrackerDayDocument {
  const { race, dayIndex, zone, date, forecast } = day
  const path = daySun(race.days[dayIndex])
  const again = (car: Car, wantedMps: Float64Array): DayForecast =>
    forecastDay({ ...race, car }, dayIndex, day.opening, wantedMps, path)
  const minute = pricedAt(day, (wantedMps) => again(race.car, wantedMps))
  const places = race.car.trackers.flatMap((held, s) => channelsOf(held).map((own, c) => ({ own, s, c })))
  return {
    date,
    zone,
    utcOffsetMin: offsetMin(race.days[dayIndex].opensMs, zone),
    price: minute,
    trackers: places.map(({ own, s, c }, t) => ({
      name: own.name,
      string: race.car.array.strings.models[s].name,
      isDead: own.isDead === true,
      ratedW: own.window.maxW,
      lowestV: own.window.inputMinV,
      highestV: own.window.inputMaxV,
      leastRiseV: own.window.leastRiseV ?? 0,
      standbyWh: forecast.balance.trackers[t].standbyJ * WH,
      parts: partsOf(day, own, t, minute),
      path: pathOf(day, t),
      ifDead: own.isDead === true ? null : lossTo(day, again(withDead(race.car, s, c), day.wantedMps), minute),
    })),
  }
}

/** The same car with one tracker dead. */
function withDead(car: Car, s: number, c: number): Car {
  const held = car.trackers[s]
  const dead = channelsOf(held).map((own, k): Tracker => (k === c ? { ...own, isDead: true } : own))
  const trackers = [...car.trackers]
  trackers[s] = dead.length === 1 ? dead[0] : sharedTracker(held.name, dead)
  return { ...car, trackers }
}

function lossTo({ forecast }: DrivenDay, lame: DayForecast, minute: Price): OneDay['ifDead'] {
  const cost = (keptJ(forecast) - keptJ(lame)) * WH
  return { wh: cost, min: minutesOf(cost, minute) }
}

const minutesOf = (energyWh: number, { whPerMin }: Price): number | null =>
  whPerMin === null ? null : energyWh / whPerMin

function partsOf(day: DrivenDay, own: Tracker, t: number, minute: Price): Part[] {
  const { steps, timetable } = day.forecast
  const count = steps.count
  const { opensMs, closesMs } = day.race.days[day.dayIndex]
  const whole = { kind: 'day' as const, name: 'whole day', fromMs: opensMs, toMs: closesMs, range: [0, count] as const }
  let first = 0
  const spans = timetable.spans.map((span, index) => {
    let end = first
    while (end < count && steps.span[end] === index) end++
    const range = [first, end] as const
    first = end
    const name = span.kind === 'drive' ? day.race.stages[span.stage].name : placeName(day, span.fromM)
    return { kind: span.kind, name, fromMs: span.fromMs, toMs: span.toMs, range }
  })
  return [whole, ...spans.filter(({ kind, range }) => kind !== 'parked' && range[1] > range[0])].map((one) =>
    partOf(day, own, t, minute, one),
  )
}

interface Stretch {
  kind: Part['kind']
  name: string
  fromMs: number
  toMs: number
  range: readonly [number, number]
}

function partOf(day: DrivenDay, own: Tracker, t: number, minute: Price, stretch: Stretch): Part {
  const { kind, name, fromMs, toMs, range } = stretch
  const { steps, balance } = day.forecast
  const durationS = steps.toMs.map((to, i) => (to - steps.fromMs[i]) / 1000)
  const figures = figuresOf(balance.trackers[t].steps, durationS, range)
  const { inputJ, lossJ, bestJ, meanInputV, meanPackV } = figures
  const rated = { W: own.window.maxW, inputV: meanInputV, packV: meanPackV }
  const orNull = (value: number): number | null => (inputJ > 0 ? value : null)
  const weighted = (by: keyof typeof WEIGHTS) => (inputJ > 0 ? 100 * weightedEfficiency(own, WEIGHTS[by], rated) : null)
  const pointWh = inputJ * WH * 0.01
  return {
    kind,
    name,
    from: localIso(fromMs, day.zone),
    to: localIso(toMs, day.zone),
    bestWh: bestJ * WH,
    inputWh: inputJ * WH,
    lossWh: lossJ * WH,
    takenPct: bestJ > 0 ? 100 * figures.takenShare : null,
    edges: figures.edges.map(({ limit, durationS: S, deniedJ }) => ({
      limit,
      ...EDGES[limit],
      minutes: S / 60,
      deniedWh: deniedJ * WH,
    })),
    meanEfficiencyPct: orNull(100 * (1 - lossJ / inputJ)),
    europeanPct: weighted('european'),
    californianPct: weighted('californian'),
    meanInputV: orNull(meanInputV),
    meanPackV: orNull(meanPackV),
    onePointWh: pointWh,
    onePointMin: minutesOf(pointWh, minute),
  }
}

function pathOf(day: DrivenDay, t: number): OneDay['path'] {
  const { steps, balance } = day.forecast
  const { steps: own } = balance.trackers[t]
  const kept = thinnedSteps(own.limit, MOST_STEPS)
  const column = (values: ArrayLike<number>, digits: number): number[] =>
    kept.map((i) => Math.round(values[i] * 10 ** digits) / 10 ** digits)
  return {
    atMs: kept.map((i) => Math.round((steps.fromMs[i] + steps.toMs[i]) / 2)),
    inputV: column(own.inputV, 2),
    packV: column(own.packV, 2),
    inputW: column(own.inputW, 1),
    limit: kept.map((i) => edgeAt(own, i) ?? ''),
  }
}
