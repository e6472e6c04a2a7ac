import { DENIED, SPENDINGS, wentOutJ } from '../engine/ledger.ts'
import type { Ledger } from '../engine/ledger.ts'
import type { StageRule } from '../engine/day-rules.ts'
import type { LedgerDocument } from './budget.ts'
import type { PlacedStage } from './race-model.ts'

const WH = 1 / 3600

const SPENDING_LABELS: Record<(typeof SPENDINGS)[number], string> = {
  rolling: 'Rolling',
  drag: 'Air drag',
  climbing: 'Climbing, net',
  brakes: 'Brakes',
  auxiliaries: 'Auxiliaries',
  trackers: 'Tracker losses',
  drive: 'Drive losses',
  pack: 'Battery losses',
}

const DENIED_LABELS: Record<(typeof DENIED)[number], string> = {
  window: 'Outside the trackers’ window',
  tracking: 'Missed in tracking',
  full: 'Spill: refused by the pack',
}

/** A ledger in watt-hours with the names that people read. */
export function ledgerDocument(ledger: Ledger, rules: StageRule[], stages: PlacedStage[]): LedgerDocument {
  const { energy } = ledger
  return {
    openingWh: ledger.openingJ * WH,
    income: ledger.income.map((entry) => ({ ...incomeName(entry, rules, stages), wh: entry.J * WH })),
    cameInWh: energy.income * WH,
    spendings: SPENDINGS.map((id) => ({ id, label: SPENDING_LABELS[id], wh: energy[id] * WH })),
    wentOutWh: wentOutJ(energy) * WH,
    shortWh: energy.short * WH,
    closingWh: ledger.closingJ * WH,
    denied: DENIED.map((id) => ({ id, label: DENIED_LABELS[id], wh: energy[id] * WH })),
  }
}

function incomeName(entry: Ledger['income'][number], rules: StageRule[], stages: PlacedStage[]) {
  switch (entry.kind) {
    case 'morning-charge':
      return { id: 'morning-charge', label: 'Morning charge' }
    case 'evening-charge':
      return { id: 'evening-charge', label: 'Evening charge' }
    case 'stop':
      return { id: `stop:${stages[entry.stage].stage.id}`, label: `${rules[entry.stage].finish} stop` }
    default:
      return { id: 'on-the-road', label: 'On the road' }
  }
}
