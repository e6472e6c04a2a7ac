import { describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { pointingDocuments } from '../../server/documents/pointing-day.ts'
import { WHOLE } from './bases.ts'
import { budgetComplaint, pointingComplaint } from './verdict.ts'

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

describe('a pointing table', () => {
  const pointing = pointingDocuments(document)
  const changed = (change: (day: (typeof pointing)['days'][number]) => void): typeof pointing => {
    const copy = structuredClone(pointing)
    change(copy.days[0])
    return copy
  }

  test('as the engine makes it has nothing wrong', () => expect(pointingComplaint(pointing)).toBeNull())

  test('with a wrong pose, a wrong figure, no reason or a gain by being off is noticed', () => {
    const { windows } = pointing.days[0]
    expect(windows.length).toBeGreaterThan(0)
    expect(pointingComplaint(changed((day) => (day.windows[0].holds[0].tiltDeg = 91)))).toContain('tilt')
    expect(pointingComplaint(changed((day) => (day.windows[0].holds[0].turnToDeg = -1)))).toContain('azimuth')
    expect(pointingComplaint(changed((day) => (day.windows[0].total.flat.packWh = Number.NaN)))).toContain('no number')
    expect(pointingComplaint(changed((day) => (day.windows = [])))).toContain('no reason')
    const paying = changed((day) => (day.windows[0].total.off[2].stringsW *= 3))
    expect(pointingComplaint(paying)).toContain('being off pays')
  })
})
