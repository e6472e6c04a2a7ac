import { useEffect } from 'preact/hooks'
import { RaceChart } from '../charts/race-chart.tsx'
import { ageAmount, stampIn, THIN } from '../format.ts'
import { savedSince } from '../plan-pick.ts'
import { atWork, ended, loadRacePlans, opened, refusal, shownDate } from '../race-plan-state.ts'
import type { RaceSetting } from '../race-plans.ts'
import type { RacePlanAnswer, RacePlanDocument } from '../race-types.ts'
import { costsText, finishText, held, isDriven, roadText } from '../race-words.ts'
import { nowMs } from '../shown.ts'
import { choice, lists } from '../state.ts'
import '../style/stop.css'
import '../style/tonight.css'
import '../style/race.css'
import { Assumptions } from './assumptions.tsx'
import { Conflict } from './conflict.tsx'
import { PlanScope } from './plan-scope.tsx'
import { RaceAsk } from './race-ask.tsx'
import { RaceDay, RaceDays } from './race-days.tsx'
import { RaceWaysOut } from './race-ways-out.tsx'
import { RaceNights } from './race-nights.tsx'
import { RacePublish } from './race-publish.tsx'

/** The plan of a race: its days together, with what each night closes at. */
export function RacePlanView() {
  const { race, car: carId, sky: skyId } = choice.value
  const setting = { race, carId, skyId }
  useEffect(() => {
    if (race !== '' && carId !== '' && skyId !== '') void loadRacePlans(setting)
  }, [race, carId, skyId])
  return (
    <div class="tonight">
      <div class="days-row">
        <PlanScope of="race-plan" />
      </div>
      {race === '' || carId === '' || skyId === '' ? (
        <p class="pad gap">A race, a car and a sky are needed first: see Set-up.</p>
      ) : (
        <Shown setting={setting} />
      )}
    </div>
  )
}

function Shown({ setting }: { setting: RaceSetting }) {
  const entry = opened.value
  const plan = entry?.plan ?? null
  const day = plan?.days.find(({ date }) => date === shownDate.value) ?? plan?.days[0]
  const blocked = plan?.days.find(({ state }) => state === 'impossible')
  return (
    <>
      <div class="lead pad">
        <h1 class="say" id="race-say">
          {plan === null ? leadText() : held(plan.outcome.text)}
        </h1>
        {refusal.value !== null && <Conflict refusal={refusal.value} />}
        <p role="status" id="race-ended">
          {ended.value}
        </p>
        {entry !== null && plan !== null && <Age entry={entry} plan={plan} />}
        {blocked !== undefined && <RaceWaysOut day={blocked} setting={setting} />}
        {plan !== null && <Facts plan={plan} />}
      </div>
      <div class="left">
        <RaceAsk setting={setting} hasPlan={plan !== null} />
      </div>
      <div class="middle">
        {plan?.days.some(({ series }) => series !== null) && <RaceChart plan={plan} />}
        {plan !== null && <RaceDays plan={plan} />}
        {plan !== null && day !== undefined && <RaceDay plan={plan} day={day} setting={setting} />}
      </div>
      <div class="side">
        {plan !== null && <RaceNights plan={plan} setting={setting} />}
        {entry !== null && plan?.days.some(isDriven) && <RacePublish key={entry.id} entry={entry} plan={plan} />}
        {plan !== null && <Assumptions items={plan.assumptions} />}
      </div>
    </>
  )
}

const leadText = (): string =>
  atWork.value === null ? 'The race is not planned as a whole yet.' : 'Planning the race.'

/** How old the plan is, and whether what it was made from has changed. */
function Age({ entry, plan }: { entry: RacePlanAnswer; plan: RacePlanDocument }) {
  if (entry.endedAt === null) return null
  const { text, unit } = ageAmount(nowMs.value - Date.parse(entry.endedAt))
  const changed = lists.value === null ? [] : savedSince(entry, lists.value)
  return (
    <>
      <p class="note" id="race-age">
        Planned {stampIn(plan.zone, Date.parse(entry.endedAt))}, {text}
        {THIN + unit} ago.
      </p>
      {changed.length > 0 && (
        <p class="changed">
          <b>Saved since: {changed.join(', ')}.</b> Plan the race again.
        </p>
      )}
    </>
  )
}

function Facts({ plan }: { plan: RacePlanDocument }) {
  const finish = finishText(plan)
  if (finish === null) return null
  return (
    <dl class="facts" id="race-facts">
      <div>
        <dt>{plan.outcome.kind === 'planned' ? 'Finish' : 'Last drive ends'}</dt>
        <dd>{finish.at}</dd>
        <dd class="note">{finish.note}</dd>
      </div>
      <div>
        <dt>On the road</dt>
        <dd data-min={plan.drivingMin}>{roadText(plan.drivingMin)}</dd>
        <dd class="note">stops included</dd>
      </div>
      <div class="wide">
        <dd class="note">{costsText(plan)}</dd>
      </div>
    </dl>
  )
}
