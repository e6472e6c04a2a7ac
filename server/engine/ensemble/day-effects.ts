import { broughtW } from '../balance.ts'
import { type DayForecast, forecastDay, type Opening, type Race } from '../forecast.ts'
import type { Reach } from '../planner/engine-tables.ts'
import { isLitByTurbidity, type SkyChange } from '../sky.ts'
import { channelsOf } from '../tracker.ts'

/** What one thing that holds all day does to the pack where it is one standard deviation more than forecast. */
export interface DayEffect {
  cause: DayCause
  /** Of the tracker whose losses are meant. */
  tracker?: string
  /** Before the car sets off, on each piece, in the stop in front of each and at the end, and after arrival. [J] */
  morningJ: number
  pieceJ: Float64Array
  stopJ: Float64Array
  duskJ: number
  /** To the harvest on the road. [J] */
  harvestJ: number
}

export type DayCause = 'haze' | 'warmth' | 'tracker-loss'

/** Standard deviations of what is worked out so. */
export interface DaySpreads {
  /** Of the Linke turbidity, where it says how much light there is. */
  linke: number
  /** Of the air's temperature. [C] */
  airC: number
  /** Of a factor on what each tracker loses, each for itself. */
  trackerLoss: number
}

/** A day driven at fixed speeds. */
export interface DrivenSo {
  race: Race
  dayIndex: number
  opening: Opening
  reach: Reach
  forecast: DayForecast
  /** [Mps] (pieces of the course) */
  speedMps: Float64Array
}

/**
 * Effects of haze, warmth and each tracker's losses on a day driven at fixed speeds.
 *
 * Haze and warmth by two more forecasts each, one standard deviation to both sides: light, cells, air and pack all
 * answer. Losses as the forecast has them, tracker by tracker.
 *
 * @returns none for what has no spread
 */
export function dayEffects(day: DrivenSo, spreads: DaySpreads): DayEffect[] {
  const effects: DayEffect[] = []
  if (spreads.linke > 0 && isLitByTurbidity(day.race.sky))
    effects.push({ cause: 'haze', ...underSky(day, { linke: spreads.linke }) })
  if (spreads.airC > 0) effects.push({ cause: 'warmth', ...underSky(day, { airC: spreads.airC }) })
  if (spreads.trackerLoss > 0) effects.push(...trackerLosses(day, spreads.trackerLoss))
  return effects
}

type Gains = Pick<DayEffect, 'morningJ' | 'pieceJ' | 'stopJ' | 'duskJ' | 'harvestJ'>

function underSky(day: DrivenSo, by: Pick<SkyChange, 'linke' | 'airC'>): Gains {
  const { race, dayIndex, opening, reach, speedMps } = day
  const [more, less] = [1, -1].map((side) => {
    const before = race.sky.change ?? { sun: 1, headwindMps: 0 }
    const change = {
      ...before,
      linke: (before.linke ?? 0) + side * (by.linke ?? 0),
      airC: (before.airC ?? 0) + side * (by.airC ?? 0),
    }
    return storedAlong(forecastDay({ ...race, sky: { ...race.sky, change } }, dayIndex, opening, speedMps), reach)
  })
  return {
    morningJ: (more.morningJ - less.morningJ) / 2,
    pieceJ: more.pieceJ.map((J, i) => (J - less.pieceJ[i]) / 2),
    stopJ: more.stopJ.map((J, i) => (J - less.stopJ[i]) / 2),
    duskJ: (more.duskJ - less.duskJ) / 2,
    harvestJ: (more.harvestJ - less.harvestJ) / 2,
  }
}

/** What is stored where, and what the road's harvest is. */
function storedAlong(forecast: DayForecast, reach: Reach): Gains {
  const { storedJ } = forecast.balance
  const gains = summedAlong(forecast, reach, (i) => storedJ[i] - (i > 0 ? storedJ[i - 1] : forecast.openingJ))
  const given = summedAlong(forecast, reach, (i) => broughtW(forecast.balance, i) * durationS(forecast, i))
  return { ...gains, harvestJ: given.harvestJ }
}

const durationS = ({ steps }: DayForecast, i: number): number => (steps.toMs[i] - steps.fromMs[i]) / 1000

function trackerLosses({ race, forecast, reach }: DrivenSo, spread: number): DayEffect[] {
  const { balance } = forecast
  const names = race.car.trackers.flatMap(channelsOf).map(({ name }) => name)
  return balance.trackers.map(({ steps: { inputW, outputW } }, t) => ({
    cause: 'tracker-loss',
    tracker: names[t],
    ...summedAlong(forecast, reach, (i) => -spread * (inputW[i] - outputW[i]) * durationS(forecast, i)),
  }))
}

/** A gain step by step, summed by where the car is; on the road it is harvest too. */
function summedAlong({ steps, timetable, road }: DayForecast, reach: Reach, gainJ: (step: number) => number): Gains {
  const { spans } = timetable
  const { stages } = road.course
  const isOnWay = ({ kind }: (typeof spans)[number]): boolean => kind === 'drive' || kind === 'stop'
  const first = spans.findIndex(({ kind }) => kind === 'drive')
  const last = spans.findLastIndex(isOnWay)
  const gains = {
    morningJ: 0,
    pieceJ: new Float64Array(reach.count),
    stopJ: new Float64Array(reach.count + 1),
    duskJ: 0,
    harvestJ: 0,
  }
  for (let i = 0; i < steps.count; i++) {
    const { kind, stage } = spans[steps.span[i]]
    if (first < 0 || steps.span[i] > last) gains.duskJ += gainJ(i)
    else if (steps.span[i] < first) gains.morningJ += gainJ(i)
    else if (kind === 'stop') gains.stopJ[stages[stage].endPiece - reach.first] += gainJ(i)
    else gains.pieceJ[steps.piece[i] - reach.first] += gainJ(i)
  }
  gains.harvestJ = gains.pieceJ.reduce((sum, J) => sum + J, 0)
  return gains
}
