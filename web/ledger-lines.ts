import type { LedgerDocument } from '../server/documents/budget.ts'
import { round10 } from './format.ts'

/** A figure of the ledger: what the service answered and what is printed. */
export interface Printed {
  wh: number
  shownWh: number
}

export interface PrintedLine extends Printed {
  id: string
  label: string
  /** Named parts of a line that stands for several, already in its sum. */
  parts?: PrintedLine[]
}

export interface PrintedLedger {
  opening: Printed
  income: PrintedLine[]
  cameIn: Printed
  spendings: PrintedLine[]
  wentOut: Printed
  short: Printed
  closing: Printed
  denied: PrintedLine[]
}

/** Spendings that are printed under one line of losses, with the word that names each in it. */
const LOSSES: Record<string, string> = { trackers: 'trackers', drive: 'drive', pack: 'battery' }

/**
 * The ledger as it is printed: every line to 10 Wh, every total the sum of the printed lines.
 *
 * The printed balance may so differ from the exact one by 5 Wh for each line; the exact one stays beside it.
 */
export function printedLedger(ledger: LedgerDocument): PrintedLedger {
  const income = ledger.income.map(printedLine)
  const lines = ledger.spendings.map(printedLine)
  const opening = printed(ledger.openingWh)
  const short = printed(ledger.shortWh)
  const cameInWh = sum(income)
  const wentOutWh = sum(lines)
  return {
    opening,
    income,
    cameIn: { wh: ledger.cameInWh, shownWh: cameInWh },
    spendings: withLosses(lines),
    wentOut: { wh: ledger.wentOutWh, shownWh: wentOutWh },
    short,
    closing: { wh: ledger.closingWh, shownWh: opening.shownWh + cameInWh + short.shownWh - wentOutWh },
    denied: ledger.denied.map(printedLine),
  }
}

const printed = (wh: number): Printed => ({ wh, shownWh: round10(wh) })

const printedLine = (line: LedgerDocument['income'][number]): PrintedLine => ({
  id: line.id,
  label: line.label,
  ...printed(line.wh),
})

const sum = (lines: readonly Printed[]): number => lines.reduce((total, line) => total + line.shownWh, 0)

/** Trackers, drive and battery under one line of losses, at the end; a spending that prints 0 and never occurs is left out. */
function withLosses(lines: PrintedLine[]): PrintedLine[] {
  const losses = lines.filter((line) => line.id in LOSSES).map((line) => ({ ...line, label: LOSSES[line.id] }))
  const others = lines.filter((line) => !(line.id in LOSSES) && !(line.id === 'brakes' && line.shownWh === 0))
  if (losses.length === 0) return others
  const wh = losses.reduce((total, part) => total + part.wh, 0)
  return [...others, { id: 'losses', label: 'Losses', wh, shownWh: sum(losses), parts: losses }]
}
