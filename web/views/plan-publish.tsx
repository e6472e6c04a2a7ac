import { signal, useSignal } from '@preact/signals'
import { useEffect } from 'preact/hooks'
import type { Answer, Refusal } from '../api.ts'
import { isFollowing, wayOf } from '../choice.ts'
import { type Chosen, follow, type RaceDay, unfollow } from '../crew.ts'
import { followedOn, loadFollowed } from '../crew-state.ts'
import type { FollowedChoice } from '../crew-types.ts'
import { clockAt } from '../format.ts'
import { isSteady } from '../plan-state.ts'
import type { PlanAnswer, Planned } from '../plan-types.ts'
import { steadyText } from '../plan-words.ts'
import { Conflict } from './conflict.tsx'

/** What was followed before the last publishing from this page; null where nothing was. */
const replaced = signal<(RaceDay & { choice: FollowedChoice | null }) | null>(null)

interface PublishProps {
  entry: PlanAnswer
  plan: Planned
}

/** Makes the plan what the crew follows, and takes that back. */
export function PlanPublish({ entry, plan }: PublishProps) {
  const refused = useSignal<Refusal | null>(null)
  const day = { race: entry.raceId, date: entry.date }
  useEffect(() => {
    if (followedOn(day) === null) void loadFollowed(day)
  }, [day.race, day.date])
  const known = followedOn(day)
  const { text, isOffered } = steadyText(plan)
  const speeds = isSteady.value && plan.steady !== null ? plan.steady.speeds : plan.forPeople.speeds
  const until = plan.camp?.until ?? null
  const chosen = { carId: entry.carId, skyId: entry.skyId, speeds, until }
  const isRecord = isFollowing(known?.choice ?? null, chosen)
  const before = replaced.value?.race === day.race && replaced.value.date === day.date ? replaced.value : null

  const change = async (ask: (version: number | null) => Promise<Answer<unknown>>): Promise<boolean> => {
    const answer = await ask(followedOn(day)?.choice?.version ?? null)
    refused.value = answer.refusal ?? null
    await loadFollowed(day)
    return answer.refusal === undefined
  }
  const publish = async (): Promise<void> => {
    const was = followedOn(day)?.choice ?? null
    if (await change((version) => follow(day, chosen, version))) replaced.value = { ...day, choice: was }
  }
  const undo = async (): Promise<void> => {
    if (before === null) return
    const was = before.choice
    const isDone = await change((version) =>
      was === null ? unfollow(day, version ?? 0) : follow(day, chosenOf(was), version),
    )
    if (isDone) replaced.value = null
  }
  return (
    <section class="sec pad publish" aria-labelledby="publish-title" id="publish">
      <div class="sech">
        <h2 id="publish-title">Plan of record</h2>
      </div>
      {isOffered && (
        <div class="seg" role="group" aria-label="Which speeds">
          <button type="button" aria-pressed={!isSteady.value} onClick={() => (isSteady.value = false)}>
            Fast
          </button>
          <button type="button" aria-pressed={isSteady.value} onClick={() => (isSteady.value = true)}>
            Steady
          </button>
        </div>
      )}
      <p id="steady">{text}</p>
      <p class="note gap" role="status">
        {isRecord
          ? `This is the plan of record, ${sinceText(known?.choice, plan)}.`
          : standingText(known?.choice, plan)}
      </p>
      {plan.camp?.goesOn === true && (
        <p class="note gap">Budgets of the days after it do not start from this camp: plan the race for that.</p>
      )}
      {refused.value !== null && <Conflict refusal={refused.value} />}
      <div class="steps">
        {known !== null && !isRecord && (
          <button type="button" class="btn" onClick={() => void publish()}>
            Make this the plan of record
          </button>
        )}
        {before !== null && isRecord && (
          <button type="button" class="btn line" onClick={() => void undo()}>
            Undo: follow {before.choice === null ? 'nothing' : wayOf(before.choice.speeds)} again
          </button>
        )}
      </div>
    </section>
  )
}

const chosenOf = ({ carId, skyId, speeds, until }: FollowedChoice): Chosen => ({ carId, skyId, speeds, until })

const sinceText = (followed: FollowedChoice | null | undefined, { forPeople }: Planned): string =>
  `since ${clockAt(Date.parse(followed?.savedAt ?? ''), forPeople.budget.utcOffsetMin)}`

function standingText(followed: FollowedChoice | null | undefined, plan: Planned): string {
  if (followed === undefined) return 'What the crew follows is not known here yet.'
  if (followed === null) return 'Nothing is followed on this day yet.'
  return `The crew follows ${wayOf(followed.speeds)}, ${sinceText(followed, plan)}.`
}
