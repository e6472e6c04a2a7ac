import { quantity } from './quantity.ts'
import { z } from 'zod'

/** Twelve Linke turbidities, January first: about 2 in clean mountain air to 8 in dust. Common practice, no source. */
export const turbidityByMonth = z
  .array(quantity(1, 12, 'Linke turbidity in the middle of a month'))
  .length(12)
  .describe('Linke turbidity by month, January first; between the middles of two months it changes evenly')

/**
 * The months' turbidities as instants: the middle of every month from the one before a stretch of time to the one
 * after it, in UTC.
 *
 * @param byMonth  twelve, January first
 */
export function monthKnots(
  byMonth: readonly number[],
  fromMs: number,
  toMs: number,
): { atMs: Float64Array; linke: Float64Array } {
  const from = new Date(fromMs)
  const first = from.getUTCFullYear() * 12 + from.getUTCMonth() - 1
  const to = new Date(toMs)
  const count = to.getUTCFullYear() * 12 + to.getUTCMonth() + 2 - first
  const startMs = (month: number) => Date.UTC(Math.floor(month / 12), month % 12)
  return {
    atMs: Float64Array.from({ length: count }, (_, i) => (startMs(first + i) + startMs(first + i + 1)) / 2),
    linke: Float64Array.from({ length: count }, (_, i) => byMonth[(first + i) % 12]),
  }
}
