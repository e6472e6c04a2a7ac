import { DayBand } from '../charts/day-band.tsx'
import { stageId } from '../shown.ts'
import { choice, choose, days, isComplete, lists, refusal, worked, workingSinceMs, type Worked } from '../state.ts'
import { daySentence, stageSentence } from '../sentence.ts'
import { clockAt, dayText } from '../format.ts'
import { hashOf } from '../choice.ts'
import { AgeOfData } from './age-of-data.tsx'
import { Assumptions } from './assumptions.tsx'
import { DayFacts, StageFacts } from './facts.tsx'
import { Say } from './figures.tsx'
import { Ledger } from './ledger.tsx'
import { PackNote } from './pack-note.tsx'
import { Ruling } from './ruling.tsx'
import { Empty, RefusedDay } from './states.tsx'
import { SpeedPanel } from './speed-panel.tsx'
import { Stages } from './stages.tsx'
import { Tabs } from './tabs.tsx'

/** The day’s budget: one sentence, two facts, the band, the ledger. */
export function DayView() {
  if (lists.value !== null && !isComplete.value) return <Empty />
  const last = worked.value
  return (
    <>
      <DayTabs />
      {refusal.value !== null && <RefusedDay refusal={refusal.value} last={last} />}
      {last === null && refusal.value?.code === 'no-contact' && <HereLink />}
      {last === null ? refusal.value === null && <Waiting /> : <Budget last={last} />}
    </>
  )
}

const Waiting = () => (
  <div class="pad">
    <h1 class="say">Working out the day.</h1>
    <Ruling />
  </div>
)

function DayTabs() {
  return (
    <Tabs
      label="Days of the race"
      chosen={choice.value.date}
      items={days.value.map((day) => ({ id: day.date, text: dayText(day.date) }))}
      onChoose={(date) => choose({ date })}
    />
  )
}

function Budget({ last }: { last: Worked }) {
  const { day, budget } = last
  const stage = day.stages.find((entry) => entry.id === stageId.value)
  return (
    <div class="budget">
      <div class="main">
        <div class="pad">
          <h1 class="say" id="sentence">
            {isOutdated(last) && `Last known, ${clockAt(last.atMs, day.utcOffsetMin)}: `}
            <Say phrase={stage === undefined ? daySentence(day) : stageSentence(day, stage)} />
          </h1>
          {stage === undefined ? <DayFacts day={day} /> : <StageFacts stage={stage} day={day} />}
        </div>
        <SpeedPanel day={day} />
        <HereLink />
        <DayBand day={day} />
        <Stages day={day} />
      </div>
      <div class="side">
        <Ledger day={day} stage={stage} />
        {stage === undefined && <PackNote pack={day.pack} />}
        <AgeOfData last={last} />
        <Assumptions items={budget.assumptions} />
      </div>
    </div>
  )
}

/** The way to the rest of the day, which works without contact too. */
const HereLink = () => (
  <p class="pad links">
    <a href={hashOf({ ...choice.value, view: 'here' })}>Go on from where the car is; what if</a>
  </p>
)

/** Whether another day or race was asked for than the one shown. */
const isOutdated = (last: Worked): boolean =>
  last.day.date !== choice.value.date && (workingSinceMs.value !== null || refusal.value !== null)
