import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { LedgerDocument } from '../../server/documents/budget.ts'
import { type PrintedLedger, printedLedger } from '../../web/ledger-lines.ts'
import { LEDGER } from './sample-day.ts'

const shown = (lines: { shownWh: number }[]): number => lines.reduce((sum, line) => sum + line.shownWh, 0)

function expectSums({ opening, income, cameIn, spendings, wentOut, short, closing }: PrintedLedger): void {
  expect(shown(income)).toBe(cameIn.shownWh)
  expect(shown(spendings)).toBe(wentOut.shownWh)
  expect(opening.shownWh + cameIn.shownWh + short.shownWh - wentOut.shownWh).toBe(closing.shownWh)
}

describe('printed ledger', () => {
  it('adds up exactly although every line was rounded on its own', () => {
    const ledger = printedLedger(LEDGER)
    expectSums(ledger)
    // By hand: 1450 + 4990 + 400 + 640 = 7480, where the exact 7498 would print 7500.
    expect(ledger.cameIn).toEqual({ wh: 7498, shownWh: 7480 })
    // By hand: 1680 + 5330 + 180 + 0 + 360 + 320 + 340 + 50 = 8260; 2860 + 7480 − 8260 = 2080.
    expect(ledger.wentOut.shownWh).toBe(8260)
    expect(ledger.closing).toEqual({ wh: 2069.3, shownWh: 2080 })
  })

  it('keeps the exact figure of the service beside every printed one', () => {
    const ledger = printedLedger(LEDGER)
    expect(ledger.income.map((line) => line.wh)).toEqual(LEDGER.income.map((line) => line.wh))
    for (const line of [...ledger.income, ...ledger.spendings]) {
      expect(line.shownWh % 10).toBe(0)
      expect(Math.abs(line.shownWh - line.wh)).toBeLessThanOrEqual(5 * Math.max(1, line.parts?.length ?? 1))
    }
  })

  it('puts what trackers, drive and battery lose under one line that names them', () => {
    const { spendings } = printedLedger(LEDGER)
    const losses = spendings.at(-1)
    expect(losses?.label).toBe('Losses')
    expect(losses?.parts?.map((part) => `${part.label} ${part.shownWh}`)).toEqual([
      'trackers 320',
      'drive 340',
      'battery 50',
    ])
    expect(losses?.shownWh).toBe(710)
    expect(losses?.wh).toBeCloseTo(724.7, 9)
  })

  it('leaves out brakes that were never used and shows them once they were', () => {
    const ids = (ledger: LedgerDocument) => printedLedger(ledger).spendings.map((line) => line.id)
    expect(ids(LEDGER)).not.toContain('brakes')
    const spendings = LEDGER.spendings.map((line) => (line.id === 'brakes' ? { ...line, wh: 25 } : line))
    expect(ids({ ...LEDGER, spendings })).toContain('brakes')
  })

  it('adds up for any ledger', () => {
    const wh = fc.double({ min: -5000, max: 50_000, noNaN: true })
    const change = fc.record({
      openingWh: wh,
      shortWh: fc.double({ min: 0, max: 5000, noNaN: true }),
      income: fc.array(fc.record({ id: fc.string(), label: fc.string(), wh }), { maxLength: 8 }),
      spendings: fc.array(
        fc.record({ id: fc.constantFrom('rolling', 'drag', 'brakes', 'trackers', 'pack'), label: fc.string(), wh }),
        { maxLength: 8 },
      ),
    })
    fc.assert(fc.property(change, (part) => expectSums(printedLedger({ ...LEDGER, ...part }))))
  })
})
