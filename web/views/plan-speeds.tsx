import { dayText, grouped, stampIn } from '../format.ts'
import { isSteady } from '../plan-state.ts'
import type { PlanAnswer, Planned } from '../plan-types.ts'
import { mergedSections, steadySections } from '../plan-words.ts'
import { nowMs } from '../shown.ts'

/** Speeds that somebody can hold, by kilometre; what is printed for the driver's folder. */
export function PlanSpeeds({ entry, plan }: { entry: PlanAnswer; plan: Planned }) {
  const isOfSteady = isSteady.value && plan.steady !== null
  const sections = mergedSections(isOfSteady ? steadySections(plan) : plan.forPeople.sections)
  const stages = [...new Set(sections.map(({ stage }) => stage))]
  return (
    <section class="sec pad print" aria-labelledby="speeds-title">
      <p class="paper">
        {plan.race}, {dayText(plan.date)}, {plan.car}. Plan {entry.id.slice(0, 8)}, printed{' '}
        {stampIn(plan.zone, nowMs.value)}.
      </p>
      <div class="sech">
        <h2 id="speeds-title">{isOfSteady ? 'Steady speeds' : 'Speeds'}</h2>
        <span class="note">hold, where posted limits allow</span>
      </div>
      <table class="off" id="speeds">
        <thead>
          <tr>
            <th scope="col">From km</th>
            <th scope="col">to km</th>
            <th scope="col">km/h</th>
          </tr>
        </thead>
        {stages.map((stage) => (
          <tbody>
            <tr class="stage">
              <th scope="rowgroup" colSpan={3}>
                {stage}
              </th>
            </tr>
            {sections.filter((section) => section.stage === stage).map(Row)}
          </tbody>
        ))}
      </table>
      <p class="note gap">
        {isOfSteady
          ? 'Kilometres from the start of each stage, speeds to the nearest km/h.'
          : 'Kilometres from where the day starts.'}{' '}
        Limits inside a section are kept: slow down for them.
      </p>
      <button type="button" class="btn line small noprint gap" onClick={() => print()}>
        Print speeds and gates
      </button>
    </section>
  )
}

const Row = ({ fromKm, toKm, speedKmh }: Planned['forPeople']['sections'][number]) => (
  <tr>
    <td>{grouped(fromKm)}</td>
    <td>{grouped(toKm)}</td>
    <td>
      <b data-kmh={speedKmh}>{speedKmh}</b>
    </td>
  </tr>
)
