import type { z } from 'zod'
import { shownValue } from '../documents/problem.ts'
import type { FoundColumn } from './columns.ts'
import type { CsvRow } from './csv-cells.ts'
import { cellNumber } from './csv-numbers.ts'
import type { Decimal } from './csv-numbers.ts'
import type { ProblemList } from './file-reading.ts'
import { UNITS } from './units.ts'
import type { UnitKind } from './units.ts'

const UNITLESS = new Set<UnitKind>(['factor', 'turbidity'])

export interface CellRules {
  /** Seconds that an energy per interval is spread over; NaN where the table has no even interval. [s] */
  intervalS?: number
  /** How far under and over the range a value may lie and still be taken as its end, in the document's unit. */
  slack?: readonly [number, number]
  /** Told of each value that was brought to the end of the range. */
  onClamp?: () => void
}

/** Reads one cell in the document's unit: null when missing, and null with a problem when it is wrong. */
export function cellReader(decimal: Decimal, problems: ProblemList) {
  return (row: CsvRow, column: FoundColumn, range: z.ZodNumber, rules: CellRules = {}): number | null => {
    const cell = row.cells[column.index]
    const raw = cellNumber(cell, decimal)
    if (raw === null) return null
    const { name = '', factor = 1, offset = 0, isPerInterval = false } = column.unit ?? {}
    const value = tidy((raw * factor + offset) / (isPerInterval ? (rules.intervalS ?? Number.NaN) : 1))
    const [min, max] = [range.minValue ?? -Infinity, range.maxValue ?? Infinity]
    if (value >= min && value <= max) return value
    const [under, over] = rules.slack ?? [0, 0]
    if (value >= min - under && value <= max + over) {
      rules.onClamp?.()
      return value < min ? min : max
    }
    const unit = UNITLESS.has(column.spec.kind) ? '' : (UNITS[column.spec.kind][0]?.name ?? '')
    problems.add({
      field: column.header,
      value: shownValue(cell),
      detail: Number.isNaN(raw)
        ? `expected a number with a decimal ${decimal === ',' ? 'comma' : 'point'}`
        : `expected ${min} to ${max} ${unit}${raw === value ? '' : `, found ${value.toPrecision(6)} once converted from ${name}`}`.trim(),
      line: row.line,
      column: row.columns[column.index],
    })
    return null
  }
}

/** Conversions leave crumbs like 0.30000000000000004; twelve digits are more than any table holds. */
const tidy = (value: number): number => Number(value.toPrecision(12))
