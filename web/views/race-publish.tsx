import { signal, useSignal } from '@preact/signals'
import { useEffect } from 'preact/hooks'
import { type Answer, documentOf, type Refusal, save } from '../api.ts'
import { isFollowing, wayOf } from '../choice.ts'
import { type Chosen, follow, followedOf, unfollow } from '../crew.ts'
import type { FollowedChoice } from '../crew-types.ts'
import { dayText } from '../format.ts'
import { loadDates, raceDates } from '../race-plan-state.ts'
import type { RacePlanAnswer, RacePlanDocument } from '../race-types.ts'
import { chosenOn, type DrivenRaceDay, isDriven, otherCloses, pctText } from '../race-words.ts'
import { Conflict } from './conflict.tsx'

type Choices = Record<string, FollowedChoice | null>

/** What was followed before the last publishing from this page, by plan. */
const replaced = signal<{ plan: string; choices: Choices } | null>(null)
/** The race before its charges were written from this page, by plan. */
const written = signal<{ plan: string; document: object } | null>(null)

interface PublishProps {
  entry: RacePlanAnswer
  plan: RacePlanDocument
}

/** Makes the plan's days what the crew follows, all at once or one by one, and takes that back. */
export function RacePublish({ entry, plan }: PublishProps) {
  const refused = useSignal<{ date: string; refusal: Refusal } | null>(null)
  const known = useSignal<Choices>({})
  const busyWith = useSignal('')
  const days = plan.days.filter(isDriven)
  const { raceId: race } = entry

  const read = async (date: string): Promise<FollowedChoice | null | undefined> => {
    const answer = await followedOf({ race, date })
    const choice = answer.value ?? (answer.refusal?.status === 404 ? null : undefined)
    if (choice !== undefined) known.value = { ...known.value, [date]: choice }
    return choice
  }
  useEffect(() => {
    for (const { date } of days) void read(date)
  }, [entry.id])

  const change = async (date: string, ask: (version: number | null) => Promise<Answer<unknown>>): Promise<boolean> => {
    busyWith.value = date
    const answer = await ask(known.value[date]?.version ?? null)
    if (answer.refusal !== undefined) refused.value = { date, refusal: answer.refusal }
    await read(date)
    return answer.refusal === undefined
  }
  const isRecord = (day: DrivenRaceDay): boolean => isFollowing(known.value[day.date] ?? null, chosenOn(day, entry))

  const inTurn = async (work: () => Promise<void>): Promise<void> => {
    refused.value = null
    await work()
    busyWith.value = ''
  }
  const publish = (these: DrivenRaceDay[]) =>
    inTurn(async () => {
      const before: Choices = replaced.value?.plan === entry.id ? { ...replaced.value.choices } : {}
      for (const day of these) {
        const { date } = day
        const was = known.value[date] ?? null
        if (!(await change(date, (version) => follow({ race, date }, chosenOn(day, entry), version)))) break
        before[date] = was
        replaced.value = { plan: entry.id, choices: { ...before } }
      }
    })
  const undo = (choices: Choices) =>
    inTurn(async () => {
      for (const [date, was] of Object.entries(choices)) {
        const back = (version: number | null): Promise<Answer<unknown>> =>
          was === null ? unfollow({ race, date }, version ?? 0) : follow({ race, date }, chosenOf(was), version)
        if (!(await change(date, back))) return
      }
      replaced.value = null
    })

  const open = days.filter((day) => known.value[day.date] !== undefined && !isRecord(day))
  const before = replaced.value?.plan === entry.id ? replaced.value.choices : {}
  const isBusy = busyWith.value !== ''
  return (
    <section class="sec pad publish" aria-labelledby="race-publish-title" id="race-publish">
      <div class="sech">
        <h2 id="race-publish-title">Plan of record</h2>
      </div>
      <div class="steps">
        {open.length > 0 && (
          <button type="button" class="btn" disabled={isBusy} onClick={() => void publish(open)}>
            {open.length === 1 ? `Follow ${dayText(open[0].date)}` : allText(open.length)}
          </button>
        )}
        {Object.keys(before).length > 0 && (
          <button type="button" class="btn line" disabled={isBusy} onClick={() => void undo(before)}>
            Undo: follow as before
          </button>
        )}
      </div>
      <p role="status">{isBusy && `Working out the budget of ${dayText(busyWith.value)}.`}</p>
      <ul class="ways">
        {days.map((day) => (
          <li data-date={day.date}>
            <p role="status">
              <b>{dayText(day.date)}</b>: {standingText(known.value[day.date], isRecord(day))}
            </p>
            {open.includes(day) && days.length > 1 && (
              <button type="button" class="btn line small" disabled={isBusy} onClick={() => void publish([day])}>
                Follow {dayText(day.date)} only
              </button>
            )}
          </li>
        ))}
      </ul>
      {refused.value !== null && (
        <>
          <p class="gap">{dayText(refused.value.date)} was not published:</p>
          <Conflict refusal={refused.value.refusal} />
        </>
      )}
      <Charges entry={entry} plan={plan} />
    </section>
  )
}

const chosenOf = ({ carId, skyId, speeds, until }: FollowedChoice): Chosen => ({ carId, skyId, speeds, until })

const allText = (count: number): string => (count === 2 ? 'Follow both days' : `Follow all ${count} days`)

function standingText(followed: FollowedChoice | null | undefined, isRecord: boolean): string {
  if (isRecord) return 'the crew follows this plan.'
  if (followed === undefined) return 'what the crew follows is not known here yet.'
  return followed === null ? 'nothing is followed yet.' : `the crew follows ${wayOf(followed.speeds)}.`
}

/** Budgets open each day by the race's own charges: where the plan's differ, they can be written there. */
function Charges({ entry, plan }: PublishProps) {
  const refused = useSignal<Refusal | null>(null)
  const others = otherCloses(plan, raceDates.value)
  const before = written.value?.plan === entry.id ? written.value.document : null
  const put = async (change: (document: RaceBody) => object): Promise<RaceBody | null> => {
    const now = await documentOf('races', entry.raceId)
    if (now.value === undefined) {
      refused.value = now.refusal
      return null
    }
    const document: RaceBody = JSON.parse(JSON.stringify(now.value.document))
    const answer = await save('races', entry.raceId, change(document), now.value.version)
    refused.value = answer.refusal ?? null
    await loadDates(entry.raceId)
    return answer.refusal === undefined ? document : null
  }
  const write = async (): Promise<void> => {
    const was = await put((document) => withCloses(document, others))
    if (was !== null) written.value = { plan: entry.id, document: was }
  }
  const undo = async (document: object): Promise<void> => {
    if ((await put(() => document)) !== null) written.value = null
  }
  if (others.length === 0 && before === null) return null
  const list = others.map(({ date, planPct, racePct }) => {
    const own = racePct === null ? 'none in the race' : `${pctText(racePct)} in the race`
    return `${dayText(date)} ${pctText(planPct)} (${own})`
  })
  return (
    <div class="gap" id="race-charges">
      {others.length > 0 && (
        <p class="note">
          Until its morning, each day’s budget opens by the charges that stand in the race. This plan closes{' '}
          {list.join(', ')}.
        </p>
      )}
      {refused.value !== null && <Conflict refusal={refused.value} />}
      <div class="steps">
        {others.length > 0 && (
          <button type="button" class="btn line small" onClick={() => void write()}>
            Write these charges into the race
          </button>
        )}
        {before !== null && (
          <button type="button" class="btn line small" onClick={() => void undo(before)}>
            Undo: the race’s charges as they were
          </button>
        )}
      </div>
    </div>
  )
}

interface RaceBody {
  days: { date: string; targetPct?: number }[]
}

/** The race with the plan's closes, to the tenth of a per cent below. */
const withCloses = (document: RaceBody, closes: { date: string; planPct: number }[]): RaceBody => ({
  ...document,
  days: document.days.map((day) => {
    const close = closes.find(({ date }) => date === day.date)
    return close === undefined ? day : { ...day, targetPct: Math.floor(close.planPct * 10) / 10 }
  }),
})
