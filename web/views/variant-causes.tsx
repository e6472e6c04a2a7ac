import { clock, THIN } from '../format.ts'
import { chanceText, tight } from '../plan-words.ts'
import type { ArrivalCause, KeptVariant, VariantAnswer } from '../variant-types.ts'
import { causeRows, differenceText, laterText, marginText, minText, minuteRows, printedSum } from '../variant-words.ts'

/** What makes the difference between a variant and the plan. */
export function VariantCauses({ of: { name, state, fault, answer } }: { of: KeptVariant }) {
  return (
    <div class="causes-of" id="variant-causes" aria-live="polite">
      <h3>{tight(name)}</h3>
      {state === 'working' && <p class="note">Being planned in full; this takes some seconds for each change.</p>}
      {fault !== null && <p>{fault.detail}</p>}
      {answer !== null && <Answer of={answer} />}
    </div>
  )
}

function Answer({ of }: { of: VariantAnswer }) {
  const { outcome, figures, assumptions } = of
  return (
    <>
      <p>{tight(outcome.text)}</p>
      {figures !== null && (
        <p>
          {marginText(of)} Below the wanted close: {chanceText(figures.missesTargetPct)}.
        </p>
      )}
      {of.arrivalCauses !== null && of.laterMin !== null && of.arrivalCauses.length > 0 && (
        <Minutes causes={of.arrivalCauses} laterMin={of.laterMin} />
      )}
      {causeRows(of).length > 0 && <Energies of={of} />}
      {assumptions.map((text) => (
        <p class="note">{text}</p>
      ))}
    </>
  )
}

/** How much later each change makes the arrival. */
function Minutes({ causes, laterMin }: { causes: ArrivalCause[]; laterMin: number }) {
  const { rows, sumMin } = minuteRows(causes)
  return (
    <table class="off" id="variant-minutes">
      <caption class="sr">What makes the arrival later or earlier, one change after the other</caption>
      <thead>
        <tr>
          <th scope="col">Makes the arrival</th>
          <th scope="col">later by, min</th>
        </tr>
      </thead>
      <tbody>
        {rows.map(({ id, label, min }) => (
          <tr data-cause={id}>
            <th scope="row">{tight(label)}</th>
            <td data-min={min}>{minText(min)}</td>
          </tr>
        ))}
        <tr class="sum">
          <th scope="row">Together, {laterText(laterMin)}</th>
          <td data-min={laterMin}>{minText(sumMin)}</td>
        </tr>
      </tbody>
    </table>
  )
}

/** What the change adds to the closing balance and takes from it. */
function Energies({ of }: { of: VariantAnswer }) {
  const rows = causeRows(of)
  const { atBaseSpeeds, energyCauses } = of
  return (
    <>
      <table class="off" id="variant-energies">
        <caption class="sr">What adds to the closing balance and takes from it, in watt-hours</caption>
        <thead>
          <tr>
            <th scope="col">Adds to the close, Wh</th>
            <th scope="col">at the plan’s speeds</th>
            <th scope="col">at its own</th>
          </tr>
        </thead>
        <tbody>
          {rows.map(({ id, label, heldWh, ownWh }) => (
            <tr data-line={id}>
              <th scope="row">{label}</th>
              <td data-wh={heldWh ?? undefined}>{differenceText(heldWh)}</td>
              <td data-wh={ownWh ?? undefined}>{differenceText(ownWh)}</td>
            </tr>
          ))}
          <tr class="sum">
            <th scope="row">Together</th>
            <td>{atBaseSpeeds === null ? '–' : differenceText(printedSum(rows.map(({ heldWh }) => heldWh)))}</td>
            <td>{energyCauses === null ? '–' : differenceText(printedSum(rows.map(({ ownWh }) => ownWh)))}</td>
          </tr>
        </tbody>
      </table>
      {atBaseSpeeds !== null && <p class="note gap">{heldText(atBaseSpeeds)}</p>}
    </>
  )
}

function heldText({ finishes, arriveAt, leastSpareWh }: NonNullable<VariantAnswer['atBaseSpeeds']>): string {
  if (!finishes) return 'At the plan’s speeds the day’s road is not finished.'
  const least = Math.round(leastSpareWh)
  const spare = least < 0 ? `falls ${-least}${THIN}Wh below the reserve` : `stays ${least}${THIN}Wh over the reserve`
  return `At the plan’s speeds the car arrives ${clock(arriveAt)} and ${spare}.`
}
