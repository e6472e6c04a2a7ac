import type { Told } from '../engine/bench-told.ts'
import { type Term, TERMS } from '../engine/loss-terms.ts'

const NAMES: Record<Term, string> = {
  standingW: 'standing',
  switchingFraction: 'switching',
  conductionOhm: 'conduction',
  rectifierV: 'rectifier',
}

const listed = (names: string[]): string =>
  names.length < 2 ? (names[0] ?? '') : `${names.slice(0, -1).join(', ')} and ${names[names.length - 1]}`

const namesOf = (terms: readonly Term[]): string => listed(terms.map((term) => NAMES[term]))

/** What a bench tells of the four losses, in one or two sentences. */
export function toldText({ terms, sums }: Told): string {
  const singly = TERMS.filter((term) => terms[term])
  if (singly.length === TERMS.length) return 'The bench tells all four losses apart.'
  const untold = TERMS.filter((term) => !terms[term] && !sums.some((sum) => sum.includes(term)))
  const parts = [...(singly.length > 0 ? [namesOf(singly)] : []), ...sums.map((sum) => `${namesOf(sum)} only together`)]
  const told = parts.length === 0 ? 'The bench tells none of the losses.' : `The bench tells ${parts.join('; ')}.`
  const more = sums.length > 0 || untold.length > 0 ? ' Points at other voltages would tell more.' : ''
  return `${told}${parts.length > 0 && untold.length > 0 ? ` It does not tell ${namesOf(untold)}.` : ''}${more}`
}
