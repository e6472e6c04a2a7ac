import { Rulings } from '../charts/bar.tsx'
import { DayBand } from '../charts/day-band.tsx'
import { Disc } from '../charts/disc.tsx'
import { Mark } from '../charts/mark.tsx'
import type { SharedBudget } from '../crew-types.ts'
import { ageAmount, clockAt, dayText, offsetText } from '../format.ts'
import { daySentence } from '../sentence.ts'
import { heardMs, shared, tie } from '../share-state.ts'
import { nowMs, stageId } from '../shown.ts'
import { AgeOfData } from './age-of-data.tsx'
import { Assumptions } from './assumptions.tsx'
import { DayFacts } from './facts.tsx'
import { Say, Wh } from './figures.tsx'
import { Ledger } from './ledger.tsx'
import { Ruling } from './ruling.tsx'
import { Stages } from './stages.tsx'

/** Contact is called lost after this time without a sign of life. [ms] */
const LOST_AFTER_MS = 15_000

/** One day’s budget for whoever holds its link: to read, live, and nothing else. */
export function SharePage() {
  const { value: told } = shared
  if (tie.value === 'ended') return <Plain title="This link has ended." text={ENDED} />
  if (told === null)
    return tie.value === 'unfollowed' ? (
      <Plain
        title="No budget yet."
        text="The crew follows no plan on this day yet. It shows here as soon as it does."
      />
    ) : (
      <Plain title={tie.value === 'lost' ? 'No contact with the service.' : 'Opening the day.'} text="" />
    )
  return <Shown told={told} />
}

const ENDED = 'It was taken back by the crew, or a part of it is missing. Ask the crew for a new one.'

const Plain = ({ title, text }: { title: string; text: string }) => (
  <>
    <header class="top">
      <Mark />
      <span class="where">Stagewatt</span>
    </header>
    <main id="main" class="phone pad">
      <h1 class="say">{title}</h1>
      {text === '' ? <Ruling /> : <p>{text}</p>}
    </main>
  </>
)

function Shown({ told }: { told: SharedBudget }) {
  const { budget, date, race } = told
  const day = budget.days.find((entry) => entry.date === date)
  if (day === undefined) return <Plain title="No budget yet." text={`The plan holds no day ${date}.`} />
  const stage = day.stages.find((entry) => entry.id === stageId.value)
  const now = Math.floor(nowMs.value / 60_000) * 60_000
  return (
    <>
      <Rulings />
      <header class="top">
        <Mark />
        <span class="where">
          {race}, {dayText(date)}
        </span>
        <span class="clock">
          {clockAt(now, day.utcOffsetMin)}
          <span class="u">{offsetText(day.utcOffsetMin)}</span>
        </span>
      </header>
      <Contact madeMs={Date.parse(told.madeAt)} />
      <main id="main" class="phone budget">
        <div class="main">
          <div class="pad">
            <h1 class="say" id="sentence">
              <Say phrase={daySentence(day)} />
            </h1>
            <DayFacts day={day} />
          </div>
          <DayBand day={day} />
          <Stages day={day} />
        </div>
        <div class="side">
          <Ledger day={day} stage={stage} />
          <AgeOfData last={{ budget, day, atMs: Date.parse(told.madeAt) }} />
          <Assumptions items={budget.assumptions} />
          <p class="pad note">
            Shared with {told.name}, to read. Trackers{' '}
            {told.learned ? 'as bench and readings have them' : 'as on the bench'}.
          </p>
        </div>
      </main>
    </>
  )
}

/** How old the day is, and whether it is still followed. */
function Contact({ madeMs }: { madeMs: number }) {
  const age = ageAmount(nowMs.value - madeMs)
  const lostMs = nowMs.value - heardMs.value
  const lost = ageAmount(lostMs)
  const isLost = tie.value === 'lost' && lostMs > LOST_AFTER_MS
  return (
    <p class={isLost ? 'link' : 'link ok'} role="status" id="contact">
      <Disc age={isLost ? 'old' : 'fresh'} />
      {isLost ? (
        <span>
          <b>
            No contact for <Wh text={lost.text} unit={lost.unit} />
          </b>
          , shown is what was last heard
        </span>
      ) : (
        <span>
          Live; worked out <Wh text={age.text} unit={age.unit} /> ago
        </span>
      )}
    </p>
  )
}
