import { noEnergy, QUANTITIES } from './energy.ts'
import type { Energy } from './energy.ts'
import type { Span, SpanKind } from './timetable.ts'

/** Spendings in the order of the ledger. */
export const SPENDINGS = ['rolling', 'drag', 'climbing', 'brakes', 'auxiliaries', 'trackers', 'drive', 'pack'] as const

/** Sun that was there and not taken, in no sum: outside the window, missed in tracking, no room in the pack. */
export const DENIED = ['window', 'tracking', 'full'] as const

/** opening + Σ income + short − Σ spendings = closing. [J] */
export interface Ledger {
  openingJ: number
  /** By where the car was; stops one by one. */
  income: { kind: SpanKind; stage: number; J: number }[]
  energy: Energy
  closingJ: number
}

/**
 * The ledger of some spans of a day, in their order.
 *
 * @param spans   the timetable's spans
 * @param energy  the balance's sums, one per span
 * @param chosen  indices of the spans that the ledger covers
 */
export function ledger(
  spans: Span[],
  energy: Energy[],
  chosen: number[],
  ends: { openingJ: number; closingJ: number },
): Ledger {
  const total = noEnergy()
  const income: Ledger['income'] = []
  for (const s of chosen) {
    for (const q of QUANTITIES) total[q] += energy[s][q]
    const { kind } = spans[s]
    const stage = kind === 'stop' ? spans[s].stage : -1
    const line = income.find((entry) => entry.kind === kind && entry.stage === stage)
    if (line !== undefined) line.J += energy[s].income
    else if (kind !== 'parked') income.push({ kind, stage, J: energy[s].income })
  }
  return { ...ends, income, energy: total }
}

/** All spendings together. [J] */
export const wentOutJ = (energy: Energy): number => SPENDINGS.reduce((sum, q) => sum + energy[q], 0)

/** What does not add up: opening + income + short − spendings − closing; rounding only. [J] */
export const gapJ = ({ openingJ, energy, closingJ }: Ledger): number =>
  openingJ + energy.income + energy.short - wentOutJ(energy) - closingJ
