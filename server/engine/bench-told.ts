import type { BenchPoint } from './loss-fit.ts'
import { lossFactors, type Term, TERMS } from './loss-terms.ts'
import { diagonal, inverse, type Matrix, quadratic } from './matrix.ts'

/** A bench point with the standard deviation of its efficiency, a fraction. */
export interface SpreadPoint extends BenchPoint {
  efficiencySd: number
}

/** Where a tracker does its full power. */
export interface FullPower {
  W: number
  inputV: number
  outputV: number
}

/** What a bench tells of the four terms. */
export interface Told {
  /** Whether it tells the term from the others. */
  terms: Record<Term, boolean>
  /** Smallest sets of the other terms that it tells together, as what they lose at full power. */
  sums: Term[][]
}

/** What a term may lose, as a share of full power, before the bench is asked; one standard deviation. Ours; no source. */
export const WIDE_SHARE = 0.01

/** How much wider than that the other terms are taken, so that they explain all they can. */
const LOOSE = 100

/** A term counts as told when the bench alone brings its standard deviation below this share of what was held. */
const NARROWED = 0.9

/** Standard deviation of each term that would by itself lose a share of full power. */
export const sdsLosing = (share: number, { W, inputV, outputV }: FullPower): number[] =>
  lossFactors(W / inputV, outputV, W / outputV).map((factor) => (share * W) / factor)

/** Where a tracker does its full power on a bench: at the points' mean voltages. */
export function fullOnBench(points: readonly BenchPoint[], fullW: number): FullPower {
  const mean = (of: (point: BenchPoint) => number): number => points.reduce((sum, p) => sum + of(p), 0) / points.length
  return { W: fullW, inputV: mean((p) => p.inputV), outputV: mean((p) => p.outputV) }
}

/** What the points say of the terms, AᵀΣ⁻¹A, with each term in units of its wide standard deviation. */
function precisionOf(points: readonly SpreadPoint[], wideSds: readonly number[], held: number): Matrix {
  const precision = diagonal(wideSds.map(() => held))
  const { size } = precision
  for (const { inputV, outputV, inputW, outputW, efficiency = 0, efficiencySd } of points) {
    const factors = lossFactors(inputW / inputV, outputV, (outputW ?? efficiency * inputW) / outputV)
    const row = factors.map((factor, j) => (factor * wideSds[j]) / (efficiencySd * inputW))
    for (let i = 0; i < size; i++) {
      for (let j = 0; j < size; j++) precision.data[i * size + j] += row[i] * row[j]
    }
  }
  return precision
}

/** What the points leave of a wide uncertainty of each term. */
export function benchCovariance(points: readonly SpreadPoint[], wideSds: readonly number[]): Matrix {
  const { size, data } = inverse(precisionOf(points, wideSds, 1), 'points')
  return { size, data: data.map((value, k) => value * wideSds[Math.floor(k / size)] * wideSds[k % size]) }
}

/**
 * Which terms a bench tells from the others, and which it tells only as a sum.
 *
 * A set of terms is told when the points narrow what they lose together at full power, on its own uncertain by
 * WIDE_SHARE a term, to below 0.9 of that although nothing else is held. At one pair of voltages switching and
 * rectifier both go with power: only their sum is told.
 *
 * @param points at least four, each with its spread
 * @param full   where sums are compared
 */
export function toldByBench(points: readonly SpreadPoint[], full: FullPower): Told {
  const left = inverse(precisionOf(points, sdsLosing(WIDE_SHARE, full), LOOSE ** -2), 'points')
  const told: number[] = []
  for (const set of SETS) {
    if (told.some((smaller) => (smaller & set) === smaller)) continue
    const within = TERMS.map((_, k) => (set >> k) & 1)
    const held = within.reduce((sum, one) => sum + one, 0)
    if (1 / (1 / quadratic(left, within) + 1 / held) < NARROWED ** 2 * held) told.push(set)
  }
  const namesOf = (set: number): Term[] => TERMS.filter((_, k) => ((set >> k) & 1) === 1)
  const sets = told.map(namesOf)
  const isTold = (term: Term): boolean => sets.some((set) => set.length === 1 && set[0] === term)
  return {
    terms: {
      standingW: isTold('standingW'),
      switchingFraction: isTold('switchingFraction'),
      conductionOhm: isTold('conductionOhm'),
      rectifierV: isTold('rectifierV'),
    },
    sums: sets.filter((set) => set.length > 1),
  }
}

/** Every set of the four terms as bits, the smaller ones first. */
const bitsIn = (set: number): number => TERMS.reduce((sum, _, k) => sum + ((set >> k) & 1), 0)
const SETS = Array.from({ length: (1 << TERMS.length) - 1 }, (_, k) => k + 1).sort((a, b) => bitsIn(a) - bitsIn(b))
