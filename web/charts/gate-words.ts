import type { DayBudget } from '../../server/documents/budget.ts'
import { grouped } from '../format.ts'

type Gate = DayBudget['gates'][number]

/** A gate as the lane names it. */
export const gateName = (gate: Gate): string =>
  gate.kind === 'dawn' ? 'Dawn' : gate.kind === 'dusk' ? 'Dusk' : gate.name

/** A gate in a table, where departures stand beside arrivals. */
export const gateWords = (gate: Gate): string =>
  gate.kind === 'depart' ? `Leave ${gate.name}` : gate.kind === 'start' ? `Start, ${gate.name}` : gateName(gate)

/** The whole band in words, for those who do not see it. */
export function bandText(day: DayBudget): string {
  const lowest = `lowest ${grouped(day.lowest.chargePct)} percent of charge near ${day.lowest.place}`
  const gates = day.gates.map((gate) => `${gateWords(gate)} ${grouped(gate.chargePct)} percent`).join(', ')
  return (
    `Day band. Harvest above the middle line, spending below it, battery charge dashed from 0 to 100 percent. ${gates}; ` +
    `${lowest}; reserve at ${grouped(day.reserve.chargePct)} percent. The same as a table follows.`
  )
}
