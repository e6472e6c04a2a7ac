import { describe, expect, test } from 'vitest'
import { type DayForecast, forecastDay } from '../../server/engine/forecast.ts'
import { dayFrom, type Here } from '../../server/engine/from-here.ts'
import { gapJ, ledger } from '../../server/engine/ledger.ts'
import { planDay } from '../../server/engine/planner/plan-day.ts'
import { demoDay } from '../support/demo-race.ts'

const day = demoDay('2026-10-17')
const { race, dayIndex, opening, forecast: whole, wantedMps } = day
const arrivalMs = ({ timetable }: DayForecast) => timetable.spans.findLast(({ kind }) => kind === 'drive')?.toMs

/** The forecast's own place, charge and warmth at the end of one of its steps. */
function hereAt({ steps, balance, timetable, weather }: DayForecast, i: number): Here {
  const span = timetable.spans[steps.span[i]]
  const gone = timetable.spans.filter(({ kind, toMs }) => kind === 'drive' && toMs <= steps.toMs[i]).length
  const stage = opening.standing.stage + gone
  const stopLeftS = span.kind === 'stop' ? (span.toMs - steps.toMs[i]) / 1000 : 0
  return {
    atMs: steps.toMs[i],
    charge: balance.charge[i],
    warmth: { packC: balance.packC[i], airC: weather.airC[i], atMs: steps.toMs[i] },
    standing: { stage, placeM: steps.toM[i], stopLeftS, speedMps: steps.toMps[i] },
  }
}

/** Steps behind which a car is in the middle of a span of a kind: every so-many-th. */
const within = (kind: string, every: number): number[] =>
  Array.from({ length: whole.steps.count }, (_, i) => i).filter((i) => {
    const span = whole.timetable.spans[whole.steps.span[i]]
    return span.kind === kind && whole.steps.toMs[i] < span.toMs && i % every === 0
  })

describe('a day taken up in its middle, with what its forecast has there', () => {
  // Cells are taken as settled where the day begins. By hand: at most 24 K between driving and parked, 0.3 % a kelvin,
  // 1,000 W over some ten minutes are 12 Wh; on the road they hardly differ.
  const goesOn = (i: number, closeWh: number): void => {
    const cut = dayFrom(race, dayIndex, hereAt(whole, i))
    const rest = forecastDay(cut.race, dayIndex, cut.opening, wantedMps)
    expect((arrivalMs(rest) ?? 0) - (arrivalMs(whole) ?? 0)).toBeCloseTo(0, 0)
    expect(Math.abs(rest.closingJ - whole.closingJ) / 3600).toBeLessThan(closeWh)
    const { spans } = rest.timetable
    const all = ledger(spans, rest.balance.spans, [...spans.keys()], rest)
    expect(Math.abs(gapJ(all))).toBeLessThan(1e-6 * (rest.openingJ + rest.balance.spans[0].income + 1e6))
  }

  test('ends as before, from anywhere on the road, at whatever speed the car has there', () => {
    const places = within('drive', 37)
    expect(places.length).toBeGreaterThan(10)
    for (const i of places) goesOn(i, 0.5)
  })

  test('ends as before, from the morning, from a stop with its rest, and in a window', () => {
    const places = [...within('morning-charge', 23), ...within('stop', 7)]
    expect(places.length).toBeGreaterThan(8)
    for (const i of places) goesOn(i, 3)
  })

  test('has its windows cut, the array up where it had been raised, and begins no earlier than now', () => {
    const { charging, raiseS } = race.days[dayIndex]
    const atMs = charging[0].fromMs + 60_000
    const cut = dayFrom(race, dayIndex, { ...opening, atMs }).race.days[dayIndex]
    expect(cut.opensMs).toBe(atMs)
    expect(cut.charging[0]).toMatchObject({ fromMs: atMs, raiseS: raiseS - 60 })
    expect(cut.charging[1]).toEqual(charging[1])
    const late = dayFrom(race, dayIndex, { ...opening, atMs: race.days[dayIndex].drivingToMs + 600_000 })
    const parked = forecastDay(late.race, dayIndex, late.opening, wantedMps)
    expect(parked.timetable.spans.some(({ kind }) => kind === 'drive')).toBe(false)
  })

  test('books the motion that the car brings along: half m v squared, as height already climbed', () => {
    const [i] = within('drive', 37).slice(3)
    const here = hereAt(whole, i)
    const v = here.standing.speedMps ?? 0
    expect(v).toBeGreaterThan(15)
    const run = (speedMps: number) => {
      const cut = dayFrom(race, dayIndex, { ...here, standing: { ...here.standing, speedMps } })
      return forecastDay(cut.race, dayIndex, cut.opening, wantedMps).balance.spans[0].climbing
    }
    const { massKg, rotatingFactor } = race.car.load
    expect(run(0) - run(v)).toBeCloseTo(0.5 * massKg * rotatingFactor * v * v, 3)
  })
})

describe('a plan made anew', { timeout: 60_000 }, () => {
  const targetCharge = day.targetCharge ?? race.car.reserveCharge
  const plan = planDay({ race, dayIndex, opening, targetCharge })
  const best = plan?.best

  test('at the start is the plan', () => {
    const cut = dayFrom(race, dayIndex, { ...opening, atMs: race.days[dayIndex].opensMs })
    const again = planDay({ ...cut, dayIndex, targetCharge })
    expect(again?.best.verdict.arrivalMs).toBeCloseTo(best?.verdict.arrivalMs ?? 0, 0)
  })

  test('on the way, with the charge that it has there, arrives within some seconds of it', () => {
    if (best === undefined) throw new Error('no plan')
    const { steps, timetable } = best.forecast
    const driven = Array.from({ length: steps.count }, (_, i) => i).filter((i) => steps.speedMps[i] > 0)
    for (const share of [0.15, 0.5, 0.85]) {
      const i = driven[Math.floor(share * driven.length)]
      const cut = dayFrom(race, dayIndex, hereAt(best.forecast, i))
      const again = planDay({ ...cut, dayIndex, targetCharge })
      expect(timetable.spans[steps.span[i]].kind).toBe('drive')
      expect(again?.best.verdict.lackJ).toBeLessThanOrEqual(0)
      const laterS = ((again?.best.verdict.arrivalMs ?? Number.NaN) - best.verdict.arrivalMs) / 1000
      expect(Math.abs(laterS), `${share}`).toBeLessThan(2.5)
    }
  })
})
