import { dayText } from '../format.ts'
import { atWork, orderRace, wish } from '../race-plan-state.ts'
import type { RaceSetting } from '../race-plans.ts'
import type { RacePlanDay, RacePlanDocument } from '../race-types.ts'
import { held, isDear } from '../race-words.ts'

/** What each night closes at and what that does; a given charge that costs time can be set free. */
export function RaceNights({ plan, setting }: { plan: RacePlanDocument; setting: RaceSetting }) {
  const last = plan.days.length - 1
  return (
    <section class="sec pad" aria-labelledby="race-nights-title">
      <div class="sech">
        <h2 id="race-nights-title">Nights</h2>
      </div>
      <ul class="ways" id="race-nights">
        {plan.days.map((day, d) => (
          <Night day={day} isLast={d === last} setting={setting} />
        ))}
      </ul>
    </section>
  )
}

function Night({ day, isLast, setting }: { day: RacePlanDay; isLast: boolean; setting: RaceSetting }) {
  const { date, close } = day
  const free = (): void => {
    wish.value = { ...wish.value, nights: { ...wish.value.nights, [date]: { kind: 'free', text: '' } } }
    void orderRace(setting)
    scrollTo({ top: 0 })
  }
  return (
    <li data-night={date}>
      <p>
        <b>
          {isLast ? 'At the end, ' : 'After '}
          {dayText(date)}
        </b>
        <br />
        {held(close.text)}
      </p>
      {isDear(day) && (
        <button type="button" class="btn line small" disabled={atWork.value !== null} onClick={free}>
          {isLast ? 'Plan down to the reserve' : 'Plan with this night free'}
        </button>
      )}
    </li>
  )
}
