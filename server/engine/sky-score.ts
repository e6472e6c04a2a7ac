/** Rows of the measured table with the mean of both skies over each; an instant weighs as
 * much as the time between its neighbours. */
export interface ComparedRows {
  fromMs: Float64Array
  toMs: Float64Array
  weightS: Float64Array
  forecast: Float64Array
  measured: Float64Array
}

/** How far a forecast is from what was measured, weighted by the length of the rows. */
export interface SkyScore {
  rows: number
  forecastMean: number
  measuredMean: number
  /** Mean of forecast less measured. */
  bias: number
  meanAbsoluteError: number
  rms: number
}

/** The rows that a rule keeps. */
export function only(rows: ComparedRows, keeps: (row: number) => boolean): ComparedRows {
  const kept = [...rows.fromMs.keys()].filter(keeps)
  const of = (values: Float64Array) => Float64Array.from(kept, (row) => values[row])
  return {
    fromMs: of(rows.fromMs),
    toMs: of(rows.toMs),
    weightS: of(rows.weightS),
    forecast: of(rows.forecast),
    measured: of(rows.measured),
  }
}

/** The score of the rows that a rule keeps; null without any. */
export function skyScore(rows: ComparedRows, keeps: (row: number) => boolean = () => true): SkyScore | null {
  const sum = { rows: 0, weight: 0, forecast: 0, measured: 0, error: 0, size: 0, square: 0 }
  rows.weightS.forEach((own, row) => {
    if (!keeps(row)) return
    const error = rows.forecast[row] - rows.measured[row]
    sum.rows++
    sum.weight += own
    sum.forecast += own * rows.forecast[row]
    sum.measured += own * rows.measured[row]
    sum.error += own * error
    sum.size += own * Math.abs(error)
    sum.square += own * error * error
  })
  const { weight } = sum
  if (!(weight > 0)) return null
  return {
    rows: sum.rows,
    forecastMean: sum.forecast / weight,
    measuredMean: sum.measured / weight,
    bias: sum.error / weight,
    meanAbsoluteError: sum.size / weight,
    rms: Math.sqrt(sum.square / weight),
  }
}
