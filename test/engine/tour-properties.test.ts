import * as fc from 'fast-check'
import { afterAll, describe, expect, test } from 'vitest'
import type { BudgetDocument, DayBudget } from '../../server/documents/budget.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { anyTourRequest } from '../support/arbitrary-tour.ts'

const RUNS = 200
const seen = { tours: 0, carriedStops: 0, outcomes: new Set<string>() }

function tour(input: unknown): BudgetDocument {
  const { document, problems } = checkDocument(forecastRequest, input)
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return forecastDocuments(document)
}

type Ledger = DayBudget['ledger']

/** Downhill climbing is negative: what moved is the size of every line. */
const movedWh = ({ income, spendings, shortWh }: Ledger): number =>
  shortWh + [...income, ...spendings].reduce((total, line) => total + Math.abs(line.wh), 0)

const sum = (values: number[]): number => values.reduce((total, value) => total + value, 0)

function expectClosed(ledger: Ledger): void {
  const gapWh = ledger.openingWh + ledger.cameInWh + ledger.shortWh - ledger.wentOutWh - ledger.closingWh
  expect(Math.abs(gapWh)).toBeLessThanOrEqual(1e-6 * movedWh(ledger) + 1e-9)
}

/** What came in outside the day's legs and their stops: mornings, evenings, stops carried over from the day before. */
function elsewhereWh(day: DayBudget): number {
  const ofStages = new Set(['on-the-road', ...day.stages.map((s) => `stop:${s.id}`)])
  const carried = day.ledger.income.filter((l) => l.id.startsWith('stop:') && !ofStages.has(l.id))
  seen.carriedStops += carried.length
  return sum(day.ledger.income.filter((l) => !ofStages.has(l.id)).map((l) => l.wh))
}

function expectSound(day: DayBudget): void {
  for (const ledger of [day.ledger, ...day.stages.map((s) => s.ledger)]) expectClosed(ledger)
  expect(sum(day.stages.map((s) => s.ledger.cameInWh)) + elsewhereWh(day)).toBeCloseTo(day.ledger.cameInWh, 6)
  expect(sum(day.stages.map((s) => s.drivenKm))).toBeCloseTo(day.drivenKm, 9)
  for (const stage of day.stages) {
    expect(stage.ledger.openingWh).toBeCloseTo(stage.opening.wh, 9)
    expect(stage.ledger.closingWh).toBeCloseTo(stage.closing.wh, 9)
  }
  day.spans.forEach((span, i) => expect(span.from).toBe(i === 0 ? day.gates[0].at : day.spans[i - 1].to))
  expect(day.lowest.wh).toBeLessThanOrEqual(Math.min(day.opening.wh, ...day.series.wh) + 0.01)
  // JSON writes what is no number as null; only a parked day has no place and time to tell of.
  const { outcome, heldKmh: _held, target: _target, targetMarginWh: _margin, stages, ...figures } = day
  const legs = stages.map(({ departsNextAt: _next, ...leg }) => leg)
  expect(JSON.stringify([figures, legs, outcome.text])).not.toMatch(/null|NaN|undefined|Infinity|Invalid/)
  expect(outcome.at === null).toBe(outcome.kind === 'parked')
}

describe('for any race of several days, stages and stops', { timeout: 60_000 }, () => {
  test('every ledger closes, stages sum to their day, and a day opens where the one before closed', () => {
    fc.assert(
      fc.property(anyTourRequest, (input) => {
        const { days, lengthKm } = tour(input)
        days.forEach((day, d) => {
          expectSound(day)
          seen.outcomes.add(day.outcome.kind)
          const measured = (input as { race: { days: { openingPct?: number }[] } }).race.days[d].openingPct
          if (d > 0 && measured === undefined) expect(day.opening.wh).toBeCloseTo(days[d - 1].closing.wh, 9)
          if (measured !== undefined) expect(day.opening.chargePct).toBeCloseTo(measured, 9)
        })
        const drivenKm = sum(days.map((day) => day.drivenKm))
        expect(drivenKm).toBeLessThanOrEqual(lengthKm + 1e-9)
        const late = sum(days.map((day) => day.penaltyMin)) - 2 * (lengthKm - drivenKm)
        expect(late).toBeGreaterThanOrEqual(-1e-6)
        seen.tours++
      }),
      { numRuns: RUNS, seed: 20261020 },
    )
  })

  afterAll(() => {
    expect(seen.tours).toBe(RUNS)
    expect(seen.carriedStops).toBeGreaterThan(2)
    expect([...seen.outcomes].sort()).toEqual([
      'below-reserve',
      'cut-off',
      'done',
      'no-speed-meets-target',
      'parked',
      'runs-flat',
      'stop-missed',
      'too-steep',
    ])
  })
})
