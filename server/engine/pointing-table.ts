import { type ArrayHarvest, type ArraySteps, arrayHarvest } from './array.ts'
import { type Balance, balance } from './balance.ts'
import { arraySteps, type DayForecast, type Race } from './forecast.ts'
import type { AimAlong } from './panel-light.ts'
import { holdsAlong, offAlong } from './pointing.ts'
import { apartRad } from './pose-search.ts'
import type { Pose } from './stand.ts'

/** What an array at its poses brings over some steps. */
export interface PoseYield {
  /** Mean of the strings' best powers. [W] */
  stringsW: number
  /** What the trackers take, at their inputs. [J] */
  takenJ: number
  /** Stored energy gained. [J] */
  storedJ: number
}

/** The same at the best poses, with the array left flat, and off the best by each angle. */
export interface Yields {
  best: PoseYield
  flat: PoseYield
  /** In the order of the angles asked for. */
  off: PoseYield[]
}

/** A time with one pose. */
export interface HoldRow extends Yields {
  fromMs: number
  toMs: number
  /** In the middle, where the stand follows all the time. */
  pose: Pose
  /** The apparent sun in the middle, as the pose of an array that faces it. */
  sun: Pose
  /** Angle between the two. [rad] */
  offSunRad: number
}

/** A span of the day in which the array stands lifted. */
export interface PointingWindow extends Yields {
  /** Of the timetable. */
  span: number
  /** Heading of the parked car. [rad] */
  headingRad: number
  holds: HoldRow[]
}

/** Rows of a stand that follows all the time. [s] */
const ROW_S = 600

/**
 * Where to point the array in every standing window of a day, and what being off costs.
 *
 * Each window is run through the same balance from the day's opening to when the array comes down: with the forecast's
 * poses, left flat, and off by each angle in the worst direction all through the window. So trackers' windows, taper
 * and a full pack count; a full pack loses nothing.
 *
 * @param day     of that race, from `forecastDay`
 * @param offRad  angles to be off by, ascending. [rad]
 * @returns in the order of the day; empty where the array is never lifted
 */
export function pointingTable(race: Race, day: DayForecast, offRad: number[]): PointingWindow[] {
  const { array } = race.car
  const steps = { ...arraySteps(race.car, { ...day, course: race.course }, day.timetable.spans), aim: day.aim }
  if (!steps.lifted.includes(1)) return []
  const best = arrayHarvest(array, steps)
  const flat = arrayHarvest(array, { ...steps, lifted: new Uint8Array(day.steps.count) })
  let before: AimAlong = day.aim
  const off = offRad.map((rad) => {
    const aim = { tiltRad: day.aim.tiltRad.slice(), azimuthRad: day.aim.azimuthRad.slice() }
    offAlong(array, steps, { aim: day.aim, offRad: rad, before }, aim)
    before = aim
    return arrayHarvest(array, { ...steps, aim })
  })
  const hold = holdsAlong(day.steps, steps.hold === undefined ? ROW_S : (array.model.stand?.reaimS ?? ROW_S))
  return windowsOf(day).map((range) => windowOf(race, day, { steps, hold, ...range }, { best, flat, off }))
}

/** Steps from..to−1 of one span in which the array is lifted. */
interface Range {
  from: number
  to: number
}

function windowsOf({ steps }: DayForecast): Range[] {
  const ranges: Range[] = []
  for (let i = 0; i < steps.count; i++) {
    if (steps.lifted[i] !== 1) continue
    const last = ranges.at(-1)
    if (last !== undefined && last.to === i && steps.span[last.from] === steps.span[i]) last.to = i + 1
    else ranges.push({ from: i, to: i + 1 })
  }
  return ranges
}

interface Asked extends Range {
  steps: ArraySteps
  hold: Int32Array
}

/** Harvest and balance of a day, of which one window is looked at. */
interface Run {
  harvest: ArrayHarvest
  energy: Balance
}

function windowOf(
  race: Race,
  day: DayForecast,
  asked: Asked,
  harvests: { best: ArrayHarvest; flat: ArrayHarvest; off: ArrayHarvest[] },
): PointingWindow {
  const run = (harvest: ArrayHarvest): Run => ({ harvest, energy: balanceTo(race, day, asked, harvests.best, harvest) })
  const runs = { best: run(harvests.best), flat: run(harvests.flat), off: harvests.off.map(run) }
  const yields = (range: Range): Yields => ({
    best: yieldOf(day, runs.best, range),
    flat: yieldOf(day, runs.flat, range),
    off: runs.off.map((each) => yieldOf(day, each, range)),
  })
  const holds: HoldRow[] = []
  for (let from = asked.from; from < asked.to; ) {
    let to = from + 1
    while (to < asked.to && asked.hold[to] === asked.hold[from]) to++
    holds.push({ ...yields({ from, to }), ...facing(day, { from, to }) })
    from = to
  }
  const { span, headingRad } = day.steps
  return { ...yields(asked), span: span[asked.from], headingRad: headingRad[asked.from], holds }
}

/** The balance up to a window's end, with another harvest in the window. */
function balanceTo(
  race: Race,
  day: DayForecast,
  { from, to }: Range,
  best: ArrayHarvest,
  inside: ArrayHarvest,
): Balance {
  const spliced = (outer: Float64Array, inner: Float64Array): Float64Array => {
    const all = outer.slice()
    all.set(inner.subarray(from, to), from)
    return all
  }
  const columns = Object.entries(best).map(([name, outer]: [string, Float64Array | Float64Array[]]) => {
    const inner: Float64Array | Float64Array[] = inside[name as keyof ArrayHarvest]
    return [
      name,
      outer instanceof Float64Array ? outer : outer.map((each, i) => spliced(each, inner[i] as Float64Array)),
    ]
  })
  const harvest = Object.fromEntries(columns) as ArrayHarvest
  const { timetable, weather, air, openingCharge: charge, openingPackC: packC } = day
  const steps = { ...day.steps, count: to }
  return balance(
    race.car,
    { course: race.course, spans: timetable.spans, steps, weather, air, harvest },
    { charge, packC },
  )
}

function yieldOf({ steps, openingJ }: DayForecast, { harvest, energy }: Run, { from, to }: Range): PoseYield {
  let [couldJ, takenJ, S] = [0, 0, 0]
  for (let i = from; i < to; i++) {
    const durationS = (steps.toMs[i] - steps.fromMs[i]) / 1000
    S += durationS
    takenJ += energy.inW[i] * durationS
    for (const bestW of harvest.bestW) couldJ += bestW[i] * durationS
  }
  const beforeJ = from > 0 ? energy.storedJ[from - 1] : openingJ
  return { stringsW: couldJ / S, takenJ, storedJ: energy.storedJ[to - 1] - beforeJ }
}

function facing({ steps, weather, aim }: DayForecast, { from, to }: Range) {
  const middle = (from + to - 1) >> 1
  const pose = { tiltRad: aim.tiltRad[middle], azimuthRad: aim.azimuthRad[middle] }
  const azimuthRad = Math.atan2(weather.sun.east[middle], weather.sun.north[middle])
  const sun = { tiltRad: weather.apparentZenithRad[middle], azimuthRad: (azimuthRad + 2 * Math.PI) % (2 * Math.PI) }
  return { fromMs: steps.fromMs[from], toMs: steps.toMs[to - 1], pose, sun, offSunRad: apartRad(pose, sun) }
}
