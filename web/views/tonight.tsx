import { useEffect } from 'preact/hooks'
import { planNews } from '../crew-state.ts'
import { dayText } from '../format.ts'
import { atWork, ended, hear, loadPlans, opened, planRefusal, type RacePlanDay } from '../plan-state.ts'
import { isPlanned, tight } from '../plan-words.ts'
import { choice, choose, days, isComplete, lists } from '../state.ts'
import '../style/stop.css'
import '../style/tonight.css'
import '../style/race.css'
import { Conflict } from './conflict.tsx'
import { PlanAge } from './plan-age.tsx'
import { PlanAsk } from './plan-ask.tsx'
import { Impossible } from './plan-impossible.tsx'
import { PlanFacts } from './plan-facts.tsx'
import { PlanPublish } from './plan-publish.tsx'
import { PlanRoad, PlanWorth } from './plan-result.tsx'
import { PlanScope } from './plan-scope.tsx'
import { PlanVariants } from './plan-variants.tsx'
import { late } from './late.tsx'
import { Tabs } from './tabs.tsx'

/** Fetched once there is a plan to put variants beside. */
const Variants = late(async () => (await import('./variants.tsx')).Variants)

/** The plan of a day: what to hold, what it leaves, how sure that is. */
export function TonightView() {
  const { race, car: carId, sky: skyId, date } = choice.value
  const day = { race, carId, skyId, date }
  useEffect(() => {
    if (isComplete.value) void loadPlans(day)
  }, [race, carId, skyId, date])
  useEffect(hear, [planNews.value])
  if (lists.value !== null && !isComplete.value) return <Missing />
  return (
    <div class="tonight">
      <div class="days-row">
        <PlanScope of="tonight" />
        <Tabs
          label="Days of the race"
          chosen={date}
          items={days.value.map((one) => ({ id: one.date, text: dayText(one.date) }))}
          onChoose={(id) => choose({ date: id })}
        />
      </div>
      <Shown day={day} />
    </div>
  )
}

function Shown({ day }: { day: RacePlanDay }) {
  const entry = opened.value
  const plan = entry?.plan ?? null
  return (
    <>
      <div class="lead pad">
        <h1 class="say" id="plan-say">
          {plan === null ? leadText(day.date) : tight(plan.outcome.text)}
        </h1>
        {planRefusal.value !== null && <Conflict refusal={planRefusal.value} />}
        <p role="status" id="plan-ended">
          {ended.value}
        </p>
        {entry !== null && <PlanAge of={entry} />}
        {plan !== null && isPlanned(plan) && <PlanFacts plan={plan} />}
        {plan !== null && plan.impossible !== null && <Impossible plan={plan} day={day} />}
      </div>
      <div class="left">
        <PlanAsk day={day} />
        {plan !== null && entry !== null && isPlanned(plan) && <PlanPublish key={entry.id} entry={entry} plan={plan} />}
      </div>
      <div class="middle">
        {plan !== null && entry !== null && isPlanned(plan) && <PlanRoad entry={entry} plan={plan} />}
      </div>
      <div class="side">
        {plan !== null && <Variants />}
        <PlanVariants day={day} />
        {plan !== null && isPlanned(plan) && <PlanWorth plan={plan} />}
      </div>
    </>
  )
}

const leadText = (date: string): string =>
  atWork.value === null ? `Nothing is planned for ${dayText(date)} yet.` : `Planning ${dayText(date)}.`

const NEEDED = { races: 'a race with days', cars: 'a car', skies: 'a sky' } as const

/** Nothing to plan with yet: what is missing, and the way there. */
function Missing() {
  const missing = (['races', 'cars', 'skies'] as const).filter((kind) => lists.value?.[kind].length === 0)
  const names = missing.length > 0 ? missing.map((kind) => NEEDED[kind]) : [NEEDED.races]
  return (
    <div class="pad">
      <h1 class="say">No plan yet.</h1>
      <p>Missing: {names.join(', ')}.</p>
      <div class="steps">
        <button type="button" class="btn" onClick={() => choose({ view: 'set-up' })}>
          Set up {names[0]}
        </button>
      </div>
    </div>
  )
}
