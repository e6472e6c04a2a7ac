import { clock, dayText, grouped, THIN, whText } from '../format.ts'
import { chanceText, mergedSections, whRange } from '../plan-words.ts'
import { shownDate } from '../race-plan-state.ts'
import type { RaceSetting } from '../race-plans.ts'
import type { RacePlanDay, RacePlanDocument } from '../race-types.ts'
import { type DrivenRaceDay, held, isDriven, kindText, pctText, roadText, stateText } from '../race-words.ts'
import { Wh } from './figures.tsx'
import { RaceWaysOut } from './race-ways-out.tsx'

/** One row a day; the one that is pressed shows its speeds below. */
export function RaceDays({ plan }: { plan: RacePlanDocument }) {
  const shown = plan.days.some(({ date }) => date === shownDate.value) ? shownDate.value : plan.days[0].date
  return (
    <section class="sec pad" aria-labelledby="race-days-title">
      <div class="sech">
        <h2 id="race-days-title">Day by day</h2>
        {plan.days.length > 1 && <span class="note">press a day for its speeds</span>}
      </div>
      <table class="off holds" id="race-days">
        <thead>
          <tr>
            <th scope="col">Day</th>
            <th scope="col">Arrive</th>
            <th scope="col">On the road</th>
            <th scope="col">Close</th>
          </tr>
        </thead>
        <tbody>
          {plan.days.map((day) => (
            <Row day={day} isShown={day.date === shown} />
          ))}
        </tbody>
      </table>
    </section>
  )
}

function Row({ day, isShown }: { day: RacePlanDay; isShown: boolean }) {
  const { date, close, state } = day
  return (
    <tr aria-current={isShown ? 'true' : undefined} data-date={date}>
      <th scope="row">
        <button type="button" aria-pressed={isShown} onClick={() => (shownDate.value = date)}>
          {dayText(date)}
        </button>
      </th>
      {isDriven(day) ? (
        <>
          <td>
            {clock(day.road.arriveAt)}
            {state === 'camp' && <span class="note under">at a camp</span>}
          </td>
          <td data-min={day.road.drivingMin}>{roadText(day.road.drivingMin)}</td>
        </>
      ) : (
        <td colSpan={2} class="q">
          {stateText(day)}
        </td>
      )}
      <td data-pct={close.closing?.chargePct}>
        {close.closing === null ? '–' : pctText(close.closing.chargePct)}
        <span class="note under">{kindText(day)}</span>
      </td>
    </tr>
  )
}

/** The day that was pressed: what it comes to, its speeds, or why it cannot be. */
export function RaceDay({ plan, day, setting }: { plan: RacePlanDocument; day: RacePlanDay; setting: RaceSetting }) {
  return (
    <section class="sec pad print" aria-labelledby="race-day-title" id="race-day">
      <p class="paper">
        {plan.race}, {plan.car}: race plan
      </p>
      <div class="sech">
        <h2 id="race-day-title">{dayText(day.date)}</h2>
        <span class="note">{day.state === 'parked' ? day.from : `${day.from} to ${day.to}`}</span>
      </div>
      <p>{held(day.text)}</p>
      {day.state === 'camp' && <RaceWaysOut day={day} setting={setting} />}
      {isDriven(day) && <Figures day={day} />}
      {isDriven(day) && <Speeds day={day} />}
    </section>
  )
}

function Figures({ day }: { day: DrivenRaceDay }) {
  const { road, close, ranges, opening } = day
  return (
    <dl class="facts three gap">
      <div>
        <dt>Set off</dt>
        <dd>{clock(road.setOffAt)}</dd>
        {opening !== null && (
          <dd class="note">
            day opens with {whText(opening.wh)}
            {THIN}Wh
          </dd>
        )}
      </div>
      <div>
        <dt>Close with</dt>
        <dd>{close.closing !== null && <Wh text={whText(close.closing.wh)} unit="Wh" wh={close.closing.wh} />}</dd>
        {ranges !== null && (
          <dd class="note">
            8 days in 10: {whRange(ranges.closingWh)}
            {THIN}Wh
          </dd>
        )}
      </div>
      {ranges !== null && (
        <div>
          <dt>Touching the reserve</dt>
          <dd data-pct={ranges.touchesReservePct}>{chanceText(ranges.touchesReservePct)}</dd>
          <dd class="note">opened as planned</dd>
        </div>
      )}
    </dl>
  )
}

function Speeds({ day: { road } }: { day: DrivenRaceDay }) {
  const sections = mergedSections(road.sections)
  const speeds = sections.map(({ speedKmh }) => speedKmh)
  return (
    <details class="gap" open={sections.length < 6}>
      <summary>
        Speeds: {Math.min(...speeds)}–{Math.max(...speeds)}
        {THIN}km/h in {sections.length} {sections.length === 1 ? 'section' : 'sections'}
      </summary>
      <table class="off" id="race-speeds">
        <thead>
          <tr>
            <th scope="col">From km</th>
            <th scope="col">to km</th>
            <th scope="col">km/h</th>
          </tr>
        </thead>
        <tbody>
          {sections.map(({ fromKm, toKm, speedKmh }) => (
            <tr>
              <td>{grouped(fromKm)}</td>
              <td>{grouped(toKm)}</td>
              <td>
                <b data-kmh={speedKmh}>{speedKmh}</b>
              </td>
            </tr>
          ))}
        </tbody>
      </table>
      <p class="note gap">
        Kilometres from where the day starts. Limits inside a section are kept: slow down for them.
      </p>
    </details>
  )
}
