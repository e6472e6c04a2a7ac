import type { DayTables } from '../../server/engine/planner/day-tables.ts'

export function plainEarliestEnd(day: DayTables, stepS: number, stepMps: number): number
