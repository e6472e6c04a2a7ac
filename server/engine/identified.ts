import { inverse, type Matrix, rootDiagonal } from './matrix.ts'
import { type Term, TERMS } from './loss-terms.ts'

/** A term counts as told by readings when they alone bring its standard deviation below this share of the prior's. */
const NARROWED = 0.9

/** How much wider than held the other terms are taken, so that they explain all they can. */
const LOOSE = 100

/**
 * Which terms of a tracker the readings tell from the others.
 *
 * What the readings say is the posterior's precision less the prior's. A term is identified when that narrows
 * its prior to below 0.9 although nothing is held of the other terms: a sum that is known well, of terms that
 * change together, identifies none of them. Such terms keep their prior in every direction but their sum's.
 *
 * @param before covariance of the four terms before the readings
 * @param after  covariance after, the gains' uncertainty included
 */
export function identifiedTerms(before: Matrix, after: Matrix): Record<Term, boolean> {
  const sds = rootDiagonal(before)
  const toPrior = inverse(inUnits(before, sds), 'covariance')
  const toPosterior = inverse(inUnits(after, sds), 'covariance')
  const isIdentified = (j: number): boolean => {
    const precision = { size: TERMS.length, data: toPosterior.data.map((value, i) => value - toPrior.data[i]) }
    for (let k = 0; k < TERMS.length; k++) precision.data[k * TERMS.length + k] += k === j ? 1 : LOOSE ** -2
    return rootDiagonal(inverse(precision, 'covariance'))[j] < NARROWED
  }
  return {
    standingW: isIdentified(0),
    switchingFraction: isIdentified(1),
    conductionOhm: isIdentified(2),
    rectifierV: isIdentified(3),
  }
}

/** A covariance in units of these standard deviations. */
const inUnits = ({ size, data }: Matrix, sds: Float64Array): Matrix => ({
  size,
  data: data.map((value, i) => value / (sds[Math.floor(i / size)] * sds[i % size])),
})
