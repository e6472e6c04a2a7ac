import { InputError } from './input-error.ts'

/** Rows around a circle, ascending, with the first repeated one turn later and the last one turn earlier. */
export interface Ring {
  atRad: Float64Array
  /** Values of each column at the rows. */
  columns: Float64Array[]
}

const CIRCLE_RAD = 2 * Math.PI

/** An angle as 0..2π. [rad] */
const turned = (rad: number): number => rad - CIRCLE_RAD * Math.floor(rad / CIRCLE_RAD)

/**
 * Rows around a circle made ready for `ringAt`: linear between rows, wrapping round; one row holds all around.
 *
 * @param field    name of the rows, for errors
 * @param atRad    ascending, the last less than a turn beyond the first. [rad] (rows)
 * @param columns  (rows) each
 * @throws InputError when there is no row, or they do not ascend within one turn
 */
export function ring(field: string, atRad: number[], columns: number[][]): Ring {
  const count = atRad.length
  if (count === 0) throw new InputError('empty', field, 'is empty, expected one row or more')
  atRad.forEach((at, i) => {
    const least = i === 0 ? Number.NEGATIVE_INFINITY : atRad[i - 1]
    if (!(at > least && at < atRad[0] + CIRCLE_RAD))
      throw new InputError('not-ascending', `${field}[${i}]`, `is at ${at} rad, expected rows that ascend in one turn`)
  })
  const shiftRad = turned(atRad[0]) - atRad[0]
  const rows = atRad.map((at, i) => ({ at: at + shiftRad, i }))
  const round = [{ at: rows[count - 1].at - CIRCLE_RAD, i: count - 1 }, ...rows, { at: rows[0].at + CIRCLE_RAD, i: 0 }]
  return {
    atRad: Float64Array.from(round, (row) => row.at),
    columns: columns.map((column) => Float64Array.from(round, (row) => column[row.i])),
  }
}

/**
 * Place of an angle between two rows: the row before it plus the share of the way to the next.
 *
 * @param rad  any angle. [rad]
 * @returns 0..rows + 1
 */
export function ringPlace(ring: Ring, rad: number): number {
  const { atRad } = ring
  let at = turned(rad)
  if (at > atRad[atRad.length - 1]) at -= CIRCLE_RAD
  let low = 0
  let high = atRad.length - 2
  while (low < high) {
    const middle = (low + high + 1) >> 1
    if (atRad[middle] <= at) low = middle
    else high = middle - 1
  }
  return low + Math.min(1, Math.max(0, (at - atRad[low]) / (atRad[low + 1] - atRad[low])))
}

/** Value of a column at a place that `ringPlace` gave. */
export function ringValue(column: Float64Array, place: number): number {
  const low = Math.min(Math.floor(place), column.length - 2)
  return column[low] + (place - low) * (column[low + 1] - column[low])
}

/** Parts of each segment in `ringMean`; even. */
const MEAN_PARTS = 32

/**
 * Mean around the circle of what a function makes of the columns' values, by Simpson's rule between rows.
 *
 * @param of  smooth in its values; is given one value a column
 */
export function ringMean(ring: Ring, of: (values: number[]) => number): number {
  const { atRad, columns } = ring
  let sum = 0
  for (let row = 1; row + 1 < atRad.length; row++) {
    const widthRad = atRad[row + 1] - atRad[row]
    for (let part = 0; part <= MEAN_PARTS; part++) {
      const weight = part === 0 || part === MEAN_PARTS ? 1 : part % 2 === 1 ? 4 : 2
      sum += weight * widthRad * of(columns.map((column) => ringValue(column, row + part / MEAN_PARTS)))
    }
  }
  return sum / (3 * MEAN_PARTS * CIRCLE_RAD)
}
