import { ageAmount, stampIn, THIN } from '../format.ts'
import { savedSince } from '../plan-pick.ts'
import type { PlanAnswer } from '../plan-types.ts'
import { wantText } from '../plan-words.ts'
import { nowMs } from '../shown.ts'
import { lists } from '../state.ts'

/** What the shown plan keeps, how old it is, and whether what it was made from has changed. */
export function PlanAge({ of }: { of: PlanAnswer }) {
  const { plan, endedAt, wanted } = of
  if (plan === null || endedAt === null) return null
  const { text, unit } = ageAmount(nowMs.value - Date.parse(endedAt))
  const changed = lists.value === null ? [] : savedSince(of, lists.value)
  return (
    <>
      <p class="note" id="plan-age">
        For {wantText(plan.target.chargePct, wanted)}. Planned {stampIn(plan.zone, Date.parse(endedAt))}, {text}
        {THIN + unit} ago.
      </p>
      {changed.length > 0 && (
        <p class="changed">
          <b>Saved since: {changed.join(', ')}.</b> Plan the day again.
        </p>
      )}
    </>
  )
}
