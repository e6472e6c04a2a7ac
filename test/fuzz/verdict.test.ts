import { describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { WHOLE } from './bases.ts'
import { budgetComplaint } from './verdict.ts'

const { document } = checkDocument(forecastRequest, WHOLE)
if (document === undefined) throw new Error('the example is refused')
const budget = forecastDocuments(document)

/** The same budget after one change to its first day. */
function changed(change: (day: (typeof budget)['days'][number]) => void): typeof budget {
  const copy = structuredClone(budget)
  change(copy.days[0])
  return copy
}

describe('a budget', () => {
  test('as the engine makes it has nothing wrong', () => expect(budgetComplaint(budget)).toBeNull())

  test('with energy from nowhere is noticed', () => {
    expect(budgetComplaint(changed((day) => (day.ledger.closingWh += 0.01)))).toContain('a ledger misses by')
    expect(budgetComplaint(changed((day) => (day.ledger.income[0].wh += 0.01)))).toContain('a ledger misses by')
    expect(budgetComplaint(changed((day) => (day.stages[0].ledger.openingWh += 0.01)))).toContain('a ledger misses by')
  })

  test('with a figure that is none is noticed', () => {
    expect(budgetComplaint(changed((day) => (day.marginWh = Number.NaN)))).toContain('no number')
    expect(budgetComplaint(changed((day) => (day.series.inW[5] = Number.POSITIVE_INFINITY)))).toContain('no number')
  })

  test('with an overfull pack is noticed', () => {
    expect(budgetComplaint(changed((day) => (day.series.chargePct[3] = 100.5)))).toContain('charge outside')
  })
})
