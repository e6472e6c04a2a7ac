import type { ComponentChildren } from 'preact'
import { grouped, THIN } from '../format.ts'
import type { Printed } from '../ledger-lines.ts'
import type { Figure, Phrase } from '../sentence.ts'

/** A figure with its unit after a thin space; an energy carries the exact value beside the printed one. */
export const Wh = ({ text, unit, wh }: { text: string; unit: string; wh?: number }) => (
  <span class="n" data-wh={wh}>
    {text}
    <span class="u">{THIN + unit}</span>
  </span>
)

/** A printed energy of the ledger, without its unit: the column has it. */
export const Cell = ({ of }: { of: Printed }) => (
  <span data-wh={of.wh} data-shown={of.shownWh}>
    {grouped(of.shownWh)}
  </span>
)

const FigureText = ({ of }: { of: Figure }) =>
  of.unit === undefined ? <span class="n">{of.text}</span> : <Wh text={of.text} unit={of.unit} wh={of.wh} />

/** A sentence with its figures set firm; commas and points stay with the figure before them. */
export function Say({ phrase }: { phrase: Phrase }): ComponentChildren {
  return phrase.map((part) => (typeof part === 'string' ? part : <FigureText of={part} />))
}
