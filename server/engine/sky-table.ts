import { InputError } from './input-error.ts'

/** Columns a sky may bring, and the values that can be true: what lies outside is a slip of unit or of column. */
const COLUMN_RANGE = {
  ghiWm2: [-25, 2000],
  dniWm2: [-25, 1500],
  dhiWm2: [-25, 1500],
  cloudFraction: [0, 1],
  airC: [-90, 65],
  vapourPa: [0, 12_000],
  windMps: [0, 120],
  windFromRad: [-7, 7],
  gustMps: [0, 150],
  pressurePa: [30_000, 110_000],
  linke: [1, 20],
} as const

export type SkyColumn = keyof typeof COLUMN_RANGE
const isColumn = (name: string): name is SkyColumn => name in COLUMN_RANGE
export const SKY_COLUMNS = Object.keys(COLUMN_RANGE).filter(isColumn)

/** The time each row of a column speaks for; an instant has equal ends. */
export interface Intervals {
  fromMs: Float64Array
  toMs: Float64Array
}

/**
 * Weather at one place: rows in ascending time, NaN where a row lacks a value.
 *
 * Irradiance is the mean over its row; a small negative (a pyranometer's night offset) is taken as none.
 * Pressure is the station's, at altM. Wind is at 10 m, by the direction it comes from.
 */
export interface SkyPlaceInput extends Intervals, Partial<Record<SkyColumn, Float64Array>> {
  latRad: number
  lonRad: number
  altM: number
  /** Only for columns whose rows speak for other times than fromMs..toMs. */
  intervalOf?: Partial<Record<SkyColumn, Intervals>>
}

export const intervalsOf = (place: SkyPlaceInput, column: SkyColumn): Intervals => place.intervalOf?.[column] ?? place

/** @throws InputError naming the first field of a place that cannot be true, its value and what was expected */
export function checkPlace(place: SkyPlaceInput, field: string): void {
  inRange(place.latRad, -Math.PI / 2, Math.PI / 2, `${field}.latRad`)
  inRange(place.lonRad, -2 * Math.PI, 2 * Math.PI, `${field}.lonRad`)
  inRange(place.altM, -500, 9000, `${field}.altM`)
  for (const column of SKY_COLUMNS) {
    const values = place[column]
    if (values === undefined) continue
    const given = place.intervalOf?.[column]
    checkIntervals(intervalsOf(place, column), values.length, given ? `${field}.intervalOf.${column}` : field)
    checkValues(values, column, `${field}.${column}`)
  }
  if ((place.windMps === undefined) !== (place.windFromRad === undefined)) {
    const absent = place.windMps === undefined ? 'windMps' : 'windFromRad'
    throw new InputError('missing', `${field}.${absent}`, 'is missing, wind needs a speed and a direction')
  }
}

function inRange(value: number, low: number, high: number, field: string): void {
  if (!(value >= low && value <= high))
    throw new InputError('out-of-range', field, `is ${value}, expected a number from ${low} to ${high}`)
}

function checkValues(values: Float64Array, column: SkyColumn, field: string): void {
  const [low, high] = COLUMN_RANGE[column]
  let numbers = 0
  values.forEach((value, row) => {
    if (Number.isNaN(value)) return
    inRange(value, low, high, `${field}[${row}]`)
    numbers++
  })
  if (numbers === 0) throw new InputError('missing', field, 'holds no number, expected at least one row with a value')
}

function checkIntervals({ fromMs, toMs }: Intervals, rows: number, field: string): void {
  if (fromMs.length !== rows || toMs.length !== rows)
    throw new InputError(
      'length',
      `${field}.fromMs`,
      `has ${fromMs.length} and toMs ${toMs.length} rows, expected ${rows}`,
    )
  for (let row = 0; row < rows; row++) {
    if (!(Number.isFinite(fromMs[row]) && Number.isFinite(toMs[row]) && toMs[row] >= fromMs[row]))
      throw new InputError(
        'out-of-range',
        `${field}.toMs[${row}]`,
        `is ${toMs[row]}, expected not before ${fromMs[row]}`,
      )
    const isAfter = row === 0 || (fromMs[row] >= toMs[row - 1] && toMs[row] > fromMs[row - 1])
    if (!isAfter)
      throw new InputError(
        'order',
        `${field}.fromMs[${row}]`,
        `is ${fromMs[row]}, expected the row before to end by then`,
      )
  }
}
