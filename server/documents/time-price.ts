import { z } from 'zod'
import type { DayForecast } from '../engine/forecast.ts'
import type { DrivenDay } from './forecast.ts'

/** What a minute saved on the road costs. */
export const price = z.strictObject({
  whPerMin: z
    .number()
    .nullable()
    .describe('energy that a minute less on the road costs, array power given up included [Wh/min]'),
  how: z.string().describe('how it was found, or why there is none'),
})

export type Price = z.output<typeof price>

/** Speeds tried to either side. [Mps] */
const STEP_MPS = 1 / 3.6

/** Less change of time than this tells nothing. [s] */
const LEAST_S = 1

/** Energy at the close less what the pack could not give. [J] */
export const keptJ = ({ closingJ, balance }: DayForecast): number =>
  closingJ - balance.spans.reduce((sum, { short }) => sum + short, 0)

const drivingS = ({ timetable }: DayForecast): number =>
  timetable.spans.reduce((sum, { kind, fromMs, toMs }) => sum + (kind === 'drive' ? (toMs - fromMs) / 1000 : 0), 0)

/**
 * Price of a minute on a day at the speeds that are held: what the day closes with at 1 km/h less and 1 km/h more
 * everywhere, over the driving time between them. Sun that an earlier finish gives up or wins is in it.
 *
 * @param again the day at other speeds
 * @source marginal energy price of time, 2bv³ + S on a level calm road: derived for a car of load a·v + b·v³
 */
export function pricedAt(day: DrivenDay, again: (wantedMps: Float64Array) => DayForecast): Price {
  if (!(drivingS(day.forecast) > 0)) return { whPerMin: null, how: 'The car is not driven on this day.' }
  const slow = again(day.wantedMps.map((mps) => Math.max(mps - STEP_MPS, STEP_MPS)))
  const fast = again(day.wantedMps.map((mps) => mps + STEP_MPS))
  if (slow.timetable.isCutOff || fast.timetable.isCutOff)
    return { whPerMin: null, how: 'No price: the clock, not the road, ends the day.' }
  const savedS = drivingS(slow) - drivingS(fast)
  if (!(savedS > LEAST_S)) return { whPerMin: null, how: 'No price: limits leave no other speed.' }
  const whPerMin = ((keptJ(slow) - keptJ(fast)) / 3600 / savedS) * 60
  if (!(whPerMin > 0)) return { whPerMin: null, how: 'No price: driving faster costs nothing here.' }
  const held = day.heldKmh === null ? 'each speed' : `the ${day.heldKmh} km/h held`
  return { whPerMin, how: `From the day’s forecast at 1 km/h below and above ${held}.` }
}
