import { clock, whText } from '../format.ts'
import type { PlanAnswer } from '../plan-types.ts'
import { chanceText, tight } from '../plan-words.ts'
import { looked, steps, takeBack } from '../variant-state.ts'
import type { KeptVariant } from '../variant-types.ts'
import { laterText } from '../variant-words.ts'

interface TableProps {
  entry: PlanAnswer
  kept: KeptVariant[]
}

/** The plan and its variants side by side. */
export function VariantTable({ entry, kept }: TableProps) {
  const { plan } = entry
  const people = plan?.forPeople ?? null
  return (
    <>
      <table class="off holds" id="variant-table">
        <caption class="sr">
          The plan and its variants: arrival, closing balance, chance of touching the reserve
        </caption>
        <thead>
          <tr>
            <th scope="col">If</th>
            <th scope="col">Arrive</th>
            <th scope="col">Close, Wh</th>
            <th scope="col">Reserve</th>
          </tr>
        </thead>
        <tbody>
          <tr data-variant="base">
            <th scope="row">As planned</th>
            {people === null || plan?.camp !== null ? (
              <td colSpan={3} class="q">
                {plan?.camp ? 'ends on the road' : 'cannot be done'}
              </td>
            ) : (
              <>
                <td>{clock(people.arriveAt)}</td>
                <td data-wh={people.closingWh}>{whText(people.closingWh)}</td>
                <td data-pct={plan.ranges?.touchesReservePct}>
                  {plan.ranges === null ? '–' : chanceText(plan.ranges.touchesReservePct)}
                </td>
              </>
            )}
          </tr>
          {kept.map((variant) => (
            <Row of={variant} />
          ))}
        </tbody>
      </table>
      <p class="note gap">
        Each planned in full. Reserve: how often it is touched, on the same days drawn. Choose one to see what makes the
        difference.
      </p>
    </>
  )
}

function Row({ of }: { of: KeptVariant }) {
  const { id, name, state, answer } = of
  const isShown = id === looked.value
  return (
    <tr data-variant={id} aria-current={isShown ? 'true' : undefined}>
      <th scope="row">
        <button type="button" class="named" aria-pressed={isShown} onClick={() => (looked.value = isShown ? '' : id)}>
          {tight(name)}
        </button>
      </th>
      {state === 'done' && answer !== null ? <Figures answer={answer} /> : <Pending of={of} />}
    </tr>
  )
}

function Figures({ answer: { figures, laterMin, outcome } }: { answer: NonNullable<KeptVariant['answer']> }) {
  if (figures === null)
    return (
      <td colSpan={3} class="q">
        {outcome.kind === 'parked' ? 'parked' : 'cannot be done'}
      </td>
    )
  return (
    <>
      <td>
        {clock(figures.arriveAt)}
        {laterMin !== null && <small class="note">{laterText(laterMin)}</small>}
      </td>
      <td data-wh={figures.closingWh}>{whText(figures.closingWh)}</td>
      <td data-pct={figures.touchesReservePct}>{chanceText(figures.touchesReservePct)}</td>
    </>
  )
}

function Pending({ of: { id, state } }: { of: KeptVariant }) {
  const told = steps.value[id]
  return (
    <td colSpan={3} class="q pending">
      {state === 'failed' ? (
        'not worked out'
      ) : (
        <>
          <span role="status">{tight(told?.step ?? 'Waiting its turn')}</span>
          <button type="button" onClick={() => void takeBack(id)}>
            Take back
          </button>
        </>
      )}
    </td>
  )
}
