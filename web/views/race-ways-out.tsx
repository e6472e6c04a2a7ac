import { nearestPct, whyText } from '../plan-words.ts'
import { orderRace, wish } from '../race-plan-state.ts'
import type { RaceSetting } from '../race-plans.ts'
import type { RacePlanDay } from '../race-types.ts'
import { held, pctText } from '../race-words.ts'

/** Why a day cannot be as it is wanted, and one click that mends its own charge. */
export function RaceWaysOut({ day: { date, impossible }, setting }: { day: RacePlanDay; setting: RaceSetting }) {
  if (impossible === null) return null
  const lower = (pct: number): void => {
    const night = { kind: 'fixed' as const, text: String(pct) }
    wish.value = { ...wish.value, nights: { ...wish.value.nights, [date]: night } }
    void orderRace(setting)
    scrollTo({ top: 0 })
  }
  return (
    <div class="impossible" data-impossible={date}>
      <p>{whyText(impossible)}</p>
      {impossible.nearest.length > 0 && <h2>Any one of these would do</h2>}
      <ul class="ways">
        {impossible.nearest.map(({ what, text, value }) => (
          <li>
            <p>{held(text)}</p>
            {what === 'target' && (
              <button
                type="button"
                class="btn"
                data-target-pct={nearestPct(value)}
                onClick={() => lower(nearestPct(value))}
              >
                Plan the race with {pctText(nearestPct(value))} there
              </button>
            )}
          </li>
        ))}
      </ul>
    </div>
  )
}
