import { cholesky, type Matrix } from './matrix.ts'
import { normalHazard } from './student-t.ts'

/** A normal of several unknowns of which some cannot be negative. */
export interface Truncated {
  /** The most likely point that is nowhere negative; the normal's own mean when that is not. */
  mode: Float64Array
  mean: Float64Array
  /** About `mean`. */
  covariance: Matrix
}

/**
 * A normal cut off at 0 in its bounded unknowns: its most likely point, and its mean and covariance.
 *
 * The mode is exact. Mean and covariance are those of the normal that agrees, one bounded unknown at a time,
 * with the cut: expectation propagation, exact for one bounded unknown or independent ones.
 *
 * @param bounded which unknowns cannot be negative
 * @throws InputError when the covariance is not positive definite
 * @source Cunningham, Hennig & Lacoste-Julien 2011, Gaussian Probabilities and Expectation Propagation (from memory)
 */
export function truncateAtZero(mean: Float64Array, covariance: Matrix, bounded: readonly boolean[]): Truncated {
  cholesky(covariance, 'covariance')
  const which = bounded.flatMap((isBounded, i) => (isBounded ? [i] : []))
  return { mode: modeAboveZero(mean, covariance, which), ...momentsAboveZero(mean, covariance, which) }
}

/**
 * Mode: mean + V·push, each push at least 0 and no more than brings its unknown to 0.
 * One push after another (projected Gauss–Seidel), which settles for any positive definite V.
 */
function modeAboveZero(mean: Float64Array, { size, data }: Matrix, which: readonly number[]): Float64Array {
  const mode = mean.slice()
  const push = new Float64Array(size)
  for (let sweep = 0; sweep < 10_000; sweep++) {
    let moved = 0
    for (const j of which) {
      const wanted = Math.max(push[j] - mode[j] / data[j * size + j], 0)
      const change = wanted - push[j]
      if (change === 0) continue
      push[j] = wanted
      for (let i = 0; i < size; i++) mode[i] += data[i * size + j] * change
      moved = Math.max(moved, Math.abs(change) * Math.sqrt(data[j * size + j]))
    }
    if (moved < 1e-13) break
  }
  for (const j of which) if (mode[j] < 0 || push[j] > 0) mode[j] = 0
  return mode
}

/** Mean and covariance by expectation propagation: a normal factor for each bounded unknown, renewed in turn. */
function momentsAboveZero(start: Float64Array, covariance: Matrix, which: readonly number[]) {
  const { size } = covariance
  const V = covariance.data.slice()
  const mean = start.slice()
  const precision = new Float64Array(size)
  const pull = new Float64Array(size)
  for (let sweep = 0; sweep < 200; sweep++) {
    let moved = 0
    for (const j of which) {
      const variance = V[j * size + j]
      const cavityPrecision = Math.max(1 / variance - precision[j], 1e-12 / variance)
      const cavityMean = (mean[j] / variance - pull[j]) / cavityPrecision
      const cut = cutAtZero(cavityMean, 1 / cavityPrecision)
      const nextPrecision = Math.max(1 / cut.variance - cavityPrecision, 0)
      const nextPull = cut.mean / cut.variance - cavityMean * cavityPrecision
      const more = nextPrecision - precision[j]
      const lean = nextPull - pull[j]
      precision[j] = nextPrecision
      pull[j] = nextPull
      moved = Math.max(moved, renew(mean, { size, data: V }, j, more, lean))
    }
    if (moved < 1e-10) break
  }
  return { mean, covariance: { size, data: V } }
}

/** Takes a change of one unknown's factor into mean and covariance; how far that unknown moved, in its own sd. */
function renew(mean: Float64Array, { size, data }: Matrix, j: number, more: number, lean: number): number {
  const column = Float64Array.from({ length: size }, (_, i) => data[i * size + j])
  const shrink = 1 + more * column[j]
  const push = (lean - more * mean[j]) / shrink
  for (let i = 0; i < size; i++) {
    mean[i] += column[i] * push
    for (let k = 0; k < size; k++) data[i * size + k] -= (more / shrink) * column[i] * column[k]
  }
  return Math.abs(push) * Math.sqrt(column[j])
}

/** Mean and variance of a normal of one unknown cut off at 0. */
function cutAtZero(mean: number, variance: number): { mean: number; variance: number } {
  const sd = Math.sqrt(variance)
  const at = mean / sd
  const hazard = normalHazard(at)
  // Far below 0 the cut normal is an exponential; the difference would cancel there.
  const share = at < -300 ? 1 / (at * at) : 1 - hazard * (hazard + at)
  const cutMean = at < -300 ? -sd / at : mean + sd * hazard
  return { mean: cutMean, variance: variance * Math.max(share, 1e-12) }
}
