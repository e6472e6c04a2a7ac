import type { TrackerLosses } from './tracker.ts'

/** The loss terms in the order of every row and covariance. */
export const TERMS = ['standingW', 'switchingFraction', 'conductionOhm', 'rectifierV'] as const
export type Term = (typeof TERMS)[number]

/** What the four terms are multiplied by: 1, Iin·Vout, Iin², Iout. */
export const lossFactors = (inputA: number, outputV: number, outputA: number): number[] => [
  1,
  inputA * outputV,
  inputA * inputA,
  outputA,
]

/** The terms in the order of TERMS. */
export const termsOf = (losses: TrackerLosses): number[] => TERMS.map((name) => losses[name])

/** The terms by their names. */
export const lossesOf = ([standingW, switchingFraction, conductionOhm, rectifierV]: ArrayLike<number> &
  Iterable<number>): TrackerLosses => ({ standingW, switchingFraction, conductionOhm, rectifierV })
