import { InputError } from './input-error.ts'

/** @throws InputError where a value is not from `least` to `most`; `unit` with its space, or empty */
export function within(field: string, value: number, least: number, most: number, unit: string): void {
  if (value >= least && value <= most) return
  throw new InputError('out-of-range', field, `is ${value}${unit}, expected ${least} to ${most}${unit}`)
}

/** @throws InputError where a value is not more than 0, or endless */
export function positive(field: string, value: number, unit: string): void {
  if (value > 0 && value < Infinity) return
  throw new InputError('out-of-range', field, `is ${value}${unit}, expected more than 0${unit}`)
}

/** @throws InputError where a value is not a whole number from `least` up */
export function wholeFrom(field: string, value: number, least: number): void {
  if (Number.isInteger(value) && value >= least) return
  throw new InputError('not-whole', field, `is ${value}, expected a whole number from ${least} up`)
}
