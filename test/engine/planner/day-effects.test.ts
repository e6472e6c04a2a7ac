import { describe, expect, it } from 'vitest'
import { type DayEffect, dayEffects, type DrivenSo } from '../../../server/engine/ensemble/day-effects.ts'
import { courseOf, members } from '../../../server/engine/ensemble/members.ts'
import { rangeOf, sharesOfSpread } from '../../../server/engine/ensemble/ranges.ts'
import { broughtW } from '../../../server/engine/balance.ts'
import { type DayForecast, forecastDay } from '../../../server/engine/forecast.ts'
import { planSun, reachOf, tablesAlong } from '../../../server/engine/planner/engine-tables.ts'
import { settle } from '../../../server/engine/planner/settle.ts'
import { driveAlong } from '../../../server/engine/planner/simulate.ts'
import type { Sky, SkyChange } from '../../../server/engine/sky.ts'
import { demoDay } from '../../support/demo-race.ts'
import { SURE } from './sure.ts'

const WH = 3600
const { race, dayIndex, opening } = demoDay('2026-10-17')
const speedMps = new Float64Array(race.course.pieces.count).fill(60 / 3.6)
const path = planSun(race.days[dayIndex])
/** Dimmed, so that no tracker is at its limit. */
const DIM = 0.6
const OPENS = 0.85
const clear: Sky = {
  ...race.sky,
  places: race.sky.places.map((place) => ({ ...place, light: { kind: 'clear' } })),
  change: { sun: DIM, headwindMps: 0 },
}

const forecastUnder = (sky: Sky, charge = OPENS): DayForecast =>
  forecastDay({ ...race, sky }, dayIndex, { ...opening, charge }, speedMps)
const changed = (sky: Sky, by: Partial<SkyChange>): Sky => ({ ...sky, change: { sun: DIM, headwindMps: 0, ...by } })

function drivenUnder(sky: Sky): DrivenSo {
  const forecast = forecastUnder(sky)
  const reach = reachOf({ race, dayIndex, base: forecast, path, targetCharge: 0.3 })
  return { race: { ...race, sky }, dayIndex, opening: { ...opening, charge: OPENS }, reach, forecast, speedMps }
}

const NOTHING = { linke: 0, airC: 0, trackerLoss: 0 }
const sum = (values: Float64Array): number => values.reduce((total, value) => total + value, 0)
const closesBy = ({ morningJ, pieceJ, stopJ, duskJ }: DayEffect): number => morningJ + sum(pieceJ) + sum(stopJ) + duskJ
const sd = (values: Float64Array): number => {
  const mean = sum(values) / values.length
  return Math.sqrt(sum(values.map((value) => (value - mean) ** 2)) / (values.length - 1))
}

describe('what else holds all day', () => {
  const day = drivenUnder(clear)
  const all = dayEffects(day, { linke: 0.5, airC: 2, trackerLoss: 0.2 })
  const of = (cause: DayEffect['cause']): DayEffect[] => all.filter((one) => one.cause === cause)

  it('closes as a forecast of one and of three such days does, to 3 % and 1 Wh, 9 % three deviations off', () => {
    const { closingJ } = day.forecast
    for (const times of [-1, 1, 3]) {
      const hazy = forecastUnder(changed(clear, { linke: 0.5 * times })).closingJ - closingJ
      const warm = forecastUnder(changed(clear, { airC: 2 * times })).closingJ - closingJ
      expect(Math.abs(closesBy(of('haze')[0]) * times - hazy)).toBeLessThan(0.03 * Math.abs(times * hazy) + WH)
      expect(Math.abs(closesBy(of('warmth')[0]) * times - warm)).toBeLessThan(
        0.03 * Math.abs(times) ** 2 * Math.abs(of('warmth')[0].harvestJ) + WH,
      )
    }
  })

  it('brings less sun under haze, and cells lose what silicon loses to warmth', () => {
    const { balance, steps } = day.forecast
    let roadJ = 0
    for (let i = 0; i < steps.count; i++)
      if (steps.speedMps[i] > 0) roadJ += (broughtW(balance, i) * (steps.toMs[i] - steps.fromMs[i])) / 1000
    // Clear-sky light falls by 3 to 6 % a unit of Linke turbidity around noon (Ineichen & Perez 2002, from memory, worked at TL 3, AM 1 to 2).
    const haze = of('haze')[0].harvestJ / roadJ / 0.5
    expect(haze).toBeLessThan(-0.025)
    expect(haze).toBeGreaterThan(-0.07)
    // Silicon cells lose 0.25 to 0.45 % a kelvin (data sheets, common practice, no source).
    const warmth = of('warmth')[0].harvestJ / roadJ / 2
    expect(warmth).toBeLessThan(-0.0025)
    expect(warmth).toBeGreaterThan(-0.0045)
    // Thinner air takes less: the day as a whole loses less than its harvest does.
    expect(closesBy(of('warmth')[0])).toBeGreaterThan(of('warmth')[0].harvestJ)
  })

  it('takes from the close what each tracker loses, once for each', () => {
    const { trackers } = day.forecast.balance
    const losses = of('tracker-loss')
    expect(new Set(losses.map(({ tracker }) => tracker)).size).toBe(trackers.length)
    losses.forEach((one, t) => expect(closesBy(one)).toBeCloseTo(-0.2 * trackers[t].lossJ, 3))
  })

  it('leaves haze out where the sky says the light itself, and what has no spread', () => {
    const told = drivenUnder(race.sky)
    expect(race.sky.places.some(({ light }) => light.kind === 'global' || light.kind === 'split')).toBe(true)
    expect(dayEffects(told, { ...NOTHING, linke: 0.5 })).toEqual([])
    expect(dayEffects(day, NOTHING)).toEqual([])
  })

  const tables = tablesAlong({ ...day, base: day.forecast, path, targetCharge: 0.3 }, day.reach)
  const drive = driveAlong(tables, speedMps, day.reach.first)
  settle(tables, { ...day, base: day.forecast, path, targetCharge: 0.3 }, day.reach, day.forecast, drive.speedMps)
  const course = (effects: DayEffect[]) =>
    courseOf(tables, drive, {
      clearW: new Float64Array(tables.pieces).fill(2000),
      perHeadwind: new Float64Array(tables.pieces),
      spreads: SURE,
      effects,
    })

  it('spreads the close of the members by as much, causes apart from each other', () => {
    for (const one of all) {
      const wantedJ = Math.abs(closesBy(one))
      expect(Math.abs(sd(members(course(all), SURE, 4000, 2, one).duskJ) / wantedJ - 1), one.cause).toBeLessThan(0.04)
    }
    const together = Math.hypot(...all.map(closesBy))
    expect(Math.abs(sd(members(course(all), SURE, 4000, 2).duskJ) / together - 1)).toBeLessThan(0.04)
    const shares = sharesOfSpread(course(all), SURE, 2000, 1).filter(({ share }) => share > 1e-6)
    for (const { cause, share } of shares)
      expect(Math.abs(share - (closesBy(cause as DayEffect) / together) ** 2)).toBeLessThan(0.04)
  })

  it('moves the middle of nothing: harvest and close stay those of the day', () => {
    const drawn = members(course(all), SURE, 4000, 3)
    const sure = members(course([]), SURE, 1, 3)
    expect(Math.abs(rangeOf(drawn.duskJ).p50 - sure.duskJ[0])).toBeLessThan(0.05 * sd(drawn.duskJ) + 1)
    expect(Math.abs(rangeOf(drawn.harvestJ).p50 - sure.harvestJ[0])).toBeLessThan(0.05 * sd(drawn.harvestJ) + 1)
    expect(sd(drawn.harvestJ)).toBeGreaterThan(10 * WH)
  })
})
