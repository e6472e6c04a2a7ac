/**
 * Rows of a run for a picture: at most so many, the first and last among them, and of every part the rows with the
 * lowest and the highest residual, so that no outlier is lost.
 *
 * @param residuals of the run, in order of time
 * @param most      most rows, at least 4
 * @returns places of rows, rising
 */
export function thinnedRows(residuals: ArrayLike<number>, most: number): number[] {
  const { length } = residuals
  if (length <= most) return Array.from({ length }, (_, i) => i)
  const parts = Math.floor((most - 2) / 2)
  const kept = new Set([0, length - 1])
  for (let part = 0; part < parts; part++) {
    const from = Math.floor((part * length) / parts)
    const to = Math.floor(((part + 1) * length) / parts)
    let [low, high] = [from, from]
    for (let i = from; i < to; i++) {
      if (residuals[i] < residuals[low]) low = i
      if (residuals[i] > residuals[high]) high = i
    }
    kept.add(low).add(high)
  }
  return [...kept].sort((a, b) => a - b)
}
