import { clock, grouped, THIN, whText } from '../format.ts'
import { variants } from '../plan-pick.ts'
import { opened, openPlan, plans, type RacePlanDay } from '../plan-state.ts'
import type { PlanEntry } from '../plan-types.ts'
import { chanceText } from '../plan-words.ts'

/** Plans of the same day that want something else, side by side. */
export function PlanVariants({ day }: { day: RacePlanDay }) {
  const kept = plans.value?.race === day.race ? variants(plans.value.items, day) : []
  if (kept.length < 2) return null
  return (
    <section class="sec pad variants" aria-labelledby="variants-title">
      <div class="sech">
        <h2 id="variants-title">Plans of this day</h2>
      </div>
      <table class="off holds" id="variants">
        <thead>
          <tr>
            <th scope="col">Wanted</th>
            <th scope="col">Arrive</th>
            <th scope="col">Close, Wh</th>
            <th scope="col">Reserve</th>
          </tr>
        </thead>
        <tbody>
          {kept.map((entry) => (
            <Row entry={entry} />
          ))}
        </tbody>
      </table>
      <p class="note gap">Reserve: how often it is touched on the days drawn.</p>
    </section>
  )
}

function Row({ entry: { id, gist, wanted } }: { entry: PlanEntry }) {
  if (gist === null) return null
  const isShown = id === opened.value?.id
  const { arriveAt, closingWh, touchesReservePct, outcome } = gist
  return (
    <tr aria-current={isShown ? 'true' : undefined} data-plan={id}>
      <th scope="row">
        <button type="button" aria-pressed={isShown} onClick={() => void openPlan(id)}>
          {grouped(gist.targetPct)}
          {THIN}%
        </button>{' '}
        {wanted.promisePct !== 5 && <span class="note">steady {chanceText(wanted.promisePct)}</span>}
      </th>
      {arriveAt === null || closingWh === null ? (
        <td colSpan={3} class="q">
          {outcome === 'parked' ? 'parked' : 'cannot be done'}
        </td>
      ) : (
        <>
          <td>{clock(arriveAt)}</td>
          <td data-wh={closingWh}>{whText(closingWh)}</td>
          <td>{touchesReservePct === null ? '–' : chanceText(touchesReservePct)}</td>
        </>
      )}
    </tr>
  )
}
