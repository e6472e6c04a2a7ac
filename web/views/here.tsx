import { useEffect } from 'preact/hooks'
import { dayText } from '../format.ts'
import type { DayAnswer } from '../phone/ask-day.ts'
import { documentsOf, onPhone } from '../phone/fetch-documents.ts'
import { dayItemOf, type HereDay, planned, planRefusal, takeUp } from '../phone/here-state.ts'
import { isPlanned, mergedSections, tight, whyText } from '../plan-words.ts'
import { choice, choose, days } from '../state.ts'
import type { PlanDocument, Planned } from '../plan-types.ts'
import '../style/here.css'
import '../style/stop.css'
import '../style/tonight.css'
import { Conflict } from './conflict.tsx'
import { HereAsk } from './here-ask.tsx'
import { PlanFacts } from './plan-facts.tsx'
import { PlanGates } from './plan-gates.tsx'
import { WhatIf } from './what-if.tsx'
import { WorkedOut } from './worked-out.tsx'

/** The rest of a day from where the car is, with contact or without. */
export function HereView() {
  const { race, car, sky, date } = choice.value
  const day: HereDay = { race, car, sky, date }
  const item = dayItemOf(days.value, onPhone.value.kept?.documents, date)
  useEffect(() => {
    if (race !== '') void documentsOf(day)
  }, [race, car, sky])
  useEffect(() => takeUp(day, item), [race, car, sky, date, item === null])
  useEffect(() => {
    if (planned.value !== null) document.getElementById('here-say')?.scrollIntoView({ block: 'nearest' })
  }, [planned.value])
  if (item === null) return <NoDay />
  if (item.stages.length === 0)
    return (
      <div class="pad">
        <h1 class="say">The car is not driven on {dayText(date)}.</h1>
      </div>
    )
  return (
    <div class="tonight here">
      <div class="lead pad">
        <h1 class="say" id="here-say">
          {planned.value === null
            ? `On from where the car is, ${dayText(date)}.`
            : tight(planned.value.value.outcome.text)}
        </h1>
        {planRefusal.value !== null && <Conflict refusal={planRefusal.value} />}
        {planned.value !== null && <Result of={planned.value} />}
      </div>
      <div class="left">
        <HereAsk day={day} item={item} />
      </div>
      <div class="middle">
        {planned.value !== null && isPlanned(planned.value.value) && <Road plan={planned.value.value} />}
      </div>
      <div class="side">
        <WhatIf day={day} item={item} />
      </div>
    </div>
  )
}

const NoDay = () => (
  <div class="pad">
    <h1 class="say">This day is not on this phone.</h1>
    <p>It comes along whenever the race is open with contact. Without contact nothing can be worked out for it here.</p>
    <div class="steps">
      <button type="button" class="btn" onClick={() => choose({ view: 'day' })}>
        Back to the day
      </button>
    </div>
  </div>
)

function Result({ of }: { of: DayAnswer<PlanDocument> }) {
  const plan = of.value
  return (
    <>
      <WorkedOut of={of} zone={plan.zone} />
      {isPlanned(plan) && <PlanFacts plan={plan} />}
      {plan.impossible !== null && (
        <div class="impossible" id="impossible">
          <p>{whyText(plan.impossible)}</p>
          <ul class="ways">
            {plan.impossible.nearest.map((way) => (
              <li>{tight(way.text)}</li>
            ))}
          </ul>
        </div>
      )}
    </>
  )
}

/** Speeds and gates of the rest of the day. */
function Road({ plan }: { plan: Planned }) {
  return (
    <>
      <section class="sec pad" aria-labelledby="hold-title">
        <div class="sech">
          <h2 id="hold-title">Speeds</h2>
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
          <tbody>
            {mergedSections(plan.forPeople.sections).map(({ fromKm, toKm, speedKmh }) => (
              <tr>
                <td>{fromKm.toFixed(0)}</td>
                <td>{toKm.toFixed(0)}</td>
                <td>
                  <b data-kmh={speedKmh}>{speedKmh}</b>
                </td>
              </tr>
            ))}
          </tbody>
        </table>
        <p class="note gap">Kilometres from where the car is. This is for reading: what the crew follows stays.</p>
      </section>
      <PlanGates plan={plan} />
    </>
  )
}
