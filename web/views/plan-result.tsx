import { PlanChart } from '../charts/plan-chart.tsx'
import { grouped } from '../format.ts'
import type { PlanAnswer, Planned } from '../plan-types.ts'
import { limitText, meritTexts, priceRuns, priceText } from '../plan-words.ts'
import { stageId } from '../shown.ts'
import { Assumptions } from './assumptions.tsx'
import { Ledger } from './ledger.tsx'
import { PlanCauses } from './plan-causes.tsx'
import { PlanGates } from './plan-gates.tsx'
import { PlanSpeeds } from './plan-speeds.tsx'

/** The plan along the road: picture, speeds, gates. */
export const PlanRoad = ({ entry, plan }: { entry: PlanAnswer; plan: Planned }) => (
  <>
    <PlanChart plan={plan} />
    <PlanSpeeds entry={entry} plan={plan} />
    <PlanGates plan={plan} />
  </>
)

/** What the plan is worth, what its range comes from, and the account of the day. */
export function PlanWorth({ plan }: { plan: Planned }) {
  const { budget } = plan.forPeople
  return (
    <>
      <Merit plan={plan} />
      <PlanCauses plan={plan} />
      <Ledger day={budget} stage={budget.stages.find(({ id }) => id === stageId.value)} />
      <Assumptions items={plan.assumptions} />
    </>
  )
}

/** How good the plan is, what energy is worth, what holds it back. */
function Merit({ plan }: { plan: Planned }) {
  const runs = priceRuns(plan.prices)
  return (
    <section class="sec pad" aria-labelledby="merit-title" id="merit">
      <div class="sech">
        <h2 id="merit-title">How good it is</h2>
      </div>
      <ul class="plain">
        {meritTexts(plan).map((text) => (
          <li>{text}</li>
        ))}
      </ul>
      <h3>Price of energy</h3>
      <ul class="plain" id="price">
        {runs.map((run) => (
          <li>
            {runs.length > 1 && `From km ${grouped(run.fromKm)}: `}
            {priceText(run)}
          </li>
        ))}
      </ul>
      <h3>What holds it back</h3>
      <table class="off">
        <thead>
          <tr>
            <th scope="col">Want</th>
            <th scope="col">costs</th>
          </tr>
        </thead>
        <tbody>
          {plan.limits.map((limit) => (
            <tr>
              <th scope="row">{limit.label}</th>
              <td data-min={limit.costMin}>{limitText(limit)}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  )
}
