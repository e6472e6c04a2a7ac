import { clock, grouped, THIN, whText } from '../format.ts'
import type { Planned } from '../plan-types.ts'
import { arrivalRange, chanceText, flatText, touchPlace, whRange } from '../plan-words.ts'
import { Wh } from './figures.tsx'

/** Arrival, closing balance and reserve, each with its range. */
export function PlanFacts({ plan }: { plan: Planned }) {
  const { forPeople, ranges, camp } = plan
  const arrival = ranges === null ? null : arrivalRange(forPeople.arriveAt, ranges)
  return (
    <dl class="facts three" id="plan-facts">
      <div>
        <dt>{camp === null ? 'Arrive' : `Camp at km ${grouped(camp.km)}`}</dt>
        <dd data-at={forPeople.arriveAt}>{clock(forPeople.arriveAt)}</dd>
        <dd class="note">
          {camp !== null && `${grouped(camp.leftKm)}${THIN}km of the day’s road are left`}
          {camp === null && arrival !== null && `${arrival.earliest}–${arrival.latest}, closing as planned`}
        </dd>
      </div>
      <div>
        <dt>Close with</dt>
        <dd>
          <Wh text={whText(forPeople.closingWh)} unit="Wh" wh={forPeople.closingWh} />
        </dd>
        <dd class="note">
          {grouped(forPeople.closingPct)}
          {THIN}% charge
          {ranges !== null && `; ${whRange(ranges.closingWh)}${THIN}Wh`}
        </dd>
      </div>
      {ranges !== null && (
        <div>
          <dt>Touching the reserve</dt>
          <dd data-pct={ranges.touchesReservePct}>{chanceText(ranges.touchesReservePct)}</dd>
          <dd class="note">{touchPlace(ranges)}</dd>
        </div>
      )}
      {ranges !== null && (
        <div>
          <dd class="note">
            Ranges are likely ranges: 8 days in 10 fall inside, of {grouped(ranges.members)} days drawn. Below the
            wanted close: {chanceText(ranges.missesTargetPct)}. {flatText(ranges)}
          </dd>
        </div>
      )}
    </dl>
  )
}
