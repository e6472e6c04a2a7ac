import * as fc from 'fast-check'
import { afterAll, describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import type { DayBudget } from '../../server/documents/budget.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import type { ForecastRequest } from '../../server/documents/forecast.ts'
import { anyRequest } from '../support/arbitrary.ts'

const RUNS = 60
const counted = { ledgers: 0, light: 0 }

function checked(input: unknown): ForecastRequest {
  const { document, problems } = checkDocument(forecastRequest, input)
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return document
}

const numbersIn = (value: unknown): number[] => {
  if (typeof value === 'number') return [value]
  if (value === null || typeof value !== 'object') return []
  return Object.values(value).flatMap(numbersIn)
}

/** Downhill climbing is negative: what moved is the size of every line. */
const movedWh = ({ ledger }: DayBudget): number =>
  ledger.shortWh + [...ledger.income, ...ledger.spendings].reduce((sum, line) => sum + Math.abs(line.wh), 0)

describe('for any car, road, sky and day', { timeout: 180_000 }, () => {
  test('the ledger closes within 1e-6 of the energy moved, its stages’ ledgers too, and no figure is NaN', () => {
    fc.assert(
      fc.property(anyRequest(), (input) => {
        const [day] = forecastDocuments(checked(input)).days
        for (const { ledger } of [day, ...day.stages]) {
          const gapWh = ledger.openingWh + ledger.cameInWh + ledger.shortWh - ledger.wentOutWh - ledger.closingWh
          expect(Math.abs(gapWh)).toBeLessThanOrEqual(1e-6 * movedWh(day) + 1e-9)
          expect(ledger.income.reduce((sum, l) => sum + l.wh, 0)).toBeCloseTo(ledger.cameInWh, 6)
          expect(ledger.spendings.reduce((sum, l) => sum + l.wh, 0)).toBeCloseTo(ledger.wentOutWh, 6)
          for (const line of [...ledger.income, ...ledger.denied]) expect(line.wh).toBeGreaterThanOrEqual(-1e-9)
        }
        expect(numbersIn(day).every(Number.isFinite)).toBe(true)
        counted.ledgers++
      }),
      { numRuns: RUNS, seed: 20261017 },
    )
  })

  test('the pack stays between empty and full and the balance follows the series', () => {
    fc.assert(
      fc.property(anyRequest(), (input) => {
        const [day] = forecastDocuments(checked(input)).days
        for (const pct of day.series.chargePct) {
          expect(pct).toBeGreaterThanOrEqual(0)
          expect(pct).toBeLessThanOrEqual(100)
        }
        expect(day.series.wh.at(-1)).toBeCloseTo(day.closing.wh, 1)
        expect(day.lowest.wh).toBeLessThanOrEqual(Math.min(day.opening.wh, ...day.series.wh) + 0.01)
      }),
      { numRuns: 40, seed: 7 },
    )
  })

  test('more light never closes lower while no string leaves its tracker’s window', () => {
    fc.assert(
      fc.property(anyRequest(), fc.double({ min: 0, max: 0.5, noNaN: true }), (input, more) => {
        const dim = checked(withLight(input, 0.4))
        const bright = checked(withLight(input, 0.4 + more))
        const [low] = forecastDocuments(dim).days
        const [high] = forecastDocuments(bright).days
        const inWindow = (day: DayBudget) => day.ledger.denied.find((l) => l.id === 'window')?.wh === 0
        if (!inWindow(low) || !inWindow(high)) return
        counted.light++
        const gain = high.ledger.closingWh - high.ledger.shortWh - (low.ledger.closingWh - low.ledger.shortWh)
        expect(gain).toBeGreaterThanOrEqual(-1e-6 * movedWh(high))
      }),
      { numRuns: 80, seed: 11 },
    )
  })

  afterAll(() => {
    expect(counted.ledgers).toBe(RUNS)
    expect(counted.light).toBeGreaterThan(10)
  })
})

/** The same request under a steady share of a strong sun. */
function withLight(input: unknown, share: number): unknown {
  const request = structuredClone(input) as { sky: { places: Record<string, unknown>[] } }
  for (const place of request.sky.places) {
    for (const column of ['cloudPct', 'dniWm2', 'dhiWm2']) delete place[column]
    place.ghiWm2 = (place.at as string[]).map(() => 700 * share)
  }
  return request
}
