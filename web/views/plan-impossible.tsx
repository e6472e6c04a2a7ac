import { grouped, THIN, whText } from '../format.ts'
import { order, type RacePlanDay, targetText } from '../plan-state.ts'
import type { PlanDocument } from '../plan-types.ts'
import { nearestPct, tight, whyText } from '../plan-words.ts'
import { choose } from '../state.ts'
import { Wh } from './figures.tsx'

type Way = NonNullable<PlanDocument['impossible']>['nearest'][number]

/** Why the day cannot be planned so, and the nearest ways out of it. */
export function Impossible({ plan, day }: { plan: PlanDocument; day: RacePlanDay }) {
  const { impossible, target, camp } = plan
  if (impossible === null) return null
  const { nearest, mostAtCloseWh } = impossible
  return (
    <div class="impossible" id="impossible">
      <p>{whyText(impossible)}</p>
      {mostAtCloseWh !== null && (
        <p class="note">
          Wanted <Wh text={whText(target.wh)} unit="Wh" wh={target.wh} /> at the close; at most{' '}
          <Wh text={whText(mostAtCloseWh)} unit="Wh" wh={mostAtCloseWh} /> can be left.
        </p>
      )}
      {camp !== null && <p>The plan below goes as far as hours, reserve and target allow.</p>}
      {nearest.length > 0 && <h2>Any one of these would do</h2>}
      {nearest.length === 0 && camp === null && (
        <p>Nothing near it would do: shorten the day, carry more charge into it, or wait for another sky.</p>
      )}
      <ul class="ways">
        {nearest.map((way) => (
          <li>
            <Out way={way} day={day} />
          </li>
        ))}
      </ul>
    </div>
  )
}

function Out({ way, day }: { way: Way; day: RacePlanDay }) {
  const { what, text, value } = way
  if (what !== 'target')
    return (
      <>
        <p>{tight(text)}</p>
        <button type="button" class="btn line small" onClick={() => choose({ view: 'set-up' })}>
          {what === 'reserve' ? 'Open the race’s reserve' : 'Open the race’s hours'}
        </button>
      </>
    )
  const pct = nearestPct(value)
  const plan = (): void => {
    targetText.value = String(pct)
    void order(day)
  }
  return (
    <>
      <p>{tight(text)}</p>
      <button type="button" class="btn" data-target-pct={pct} onClick={plan}>
        Plan for {grouped(pct)}
        {THIN}% instead
      </button>
    </>
  )
}
