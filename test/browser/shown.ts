import type { Page } from 'playwright-core'
import type { BudgetDocument, DayBudget, LedgerDocument } from '../../server/documents/budget.ts'
import type { SpeedsInput } from '../../server/documents/speeds.ts'
import type { Service } from './service.ts'

/** An energy on the screen: the exact value it carries and what is printed. */
export interface ShownEnergy {
  line: string
  wh: number
  printed: number
}

/** Every energy under an element, in the order of the page. */
export async function shownEnergies(page: Page, under: string): Promise<ShownEnergy[]> {
  const rows: { line: string; wh: string; text: string }[] = await page.evaluate(
    `[...document.querySelectorAll(${JSON.stringify(`${under} [data-wh]`)})].map((e) => ({
      line: e.closest('tr')?.dataset.line ?? e.closest('tr')?.querySelector('th')?.textContent ?? '',
      wh: e.dataset.wh, text: e.textContent }))`,
  )
  return rows.map(({ line, wh, text }) => ({ line, wh: Number(wh), printed: printedNumber(text) }))
}

/** −1 240 Wh as a number. */
const printedNumber = (text: string): number => Number(text.replace('\u2212', '-').replace(/[^\d-]/g, ''))

/** The budget that the service gives to the same question as the page. */
export async function budgetOf(
  service: Service,
  speeds: SpeedsInput,
  names: Record<string, string>,
): Promise<DayBudget> {
  const { race, car, sky, date } = names
  const response = await service.ask('/api/v1/forecast', {
    method: 'POST',
    headers: { 'content-type': 'application/json' },
    body: JSON.stringify({ race: { id: race }, car: { id: car }, sky: { id: sky }, date, speeds }),
  })
  if (!response.ok) throw new Error(`${response.status} ${await response.text()}`)
  const budget: BudgetDocument = JSON.parse(await response.text())
  return budget.days[0]
}

/** Every energy of a ledger in the order in which it is printed. */
export function ledgerEnergies(ledger: LedgerDocument, reserveWh: number): number[] {
  const isLoss = ({ id }: { id: string }) => ['trackers', 'drive', 'pack'].includes(id)
  const losses = ledger.spendings.filter(isLoss)
  const others = ledger.spendings.filter((line) => !isLoss(line) && !(line.id === 'brakes' && Math.abs(line.wh) < 5))
  return [
    ledger.openingWh,
    ...ledger.income.map((line) => line.wh),
    ledger.cameInWh,
    ...others.map((line) => line.wh),
    losses.reduce((sum, line) => sum + line.wh, 0),
    ...losses.map((line) => line.wh),
    ledger.wentOutWh,
    ledger.closingWh,
    reserveWh,
  ]
}
