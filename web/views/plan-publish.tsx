import { signal, useSignal } from '@preact/signals'
import { useEffect } from 'preact/hooks'
import type { SpeedsInput } from '../../server/documents/speeds.ts'
import type { Refusal } from '../api.ts'
import { sectionsOf, wayOf } from '../choice.ts'
import { follow, type RaceDay } from '../crew.ts'
import { followedOn, loadFollowed } from '../crew-state.ts'
import type { FollowedChoice } from '../crew-types.ts'
import { clockAt } from '../format.ts'
import { isSteady } from '../plan-state.ts'
import type { PlanAnswer, Planned } from '../plan-types.ts'
import { steadyText } from '../plan-words.ts'
import { Conflict } from './conflict.tsx'

/** What was followed before the last publishing from this page. */
const replaced = signal<(RaceDay & { choice: FollowedChoice }) | null>(null)

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
  const isRecord = isFollowed(known?.choice ?? null, entry, speeds)
  const before = replaced.value?.race === day.race && replaced.value.date === day.date ? replaced.value : null

  const put = async (choice: Pick<FollowedChoice, 'carId' | 'skyId' | 'speeds'>): Promise<boolean> => {
    const answer = await follow(day, choice, followedOn(day)?.choice?.version ?? null)
    refused.value = answer.refusal ?? null
    await loadFollowed(day)
    return answer.refusal === undefined
  }
  const publish = async (): Promise<void> => {
    const was = followedOn(day)?.choice ?? null
    const isDone = await put({ carId: entry.carId, skyId: entry.skyId, speeds })
    if (isDone) replaced.value = was === null ? null : { ...day, choice: was }
  }
  const undo = async (): Promise<void> => {
    if (before === null) return
    const { carId, skyId, speeds: those } = before.choice
    if (await put({ carId, skyId, speeds: those })) replaced.value = null
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
      {refused.value !== null && <Conflict refusal={refused.value} />}
      <div class="steps">
        {known !== null && !isRecord && (
          <button type="button" class="btn" onClick={() => void publish()}>
            Make this the plan of record
          </button>
        )}
        {before !== null && isRecord && (
          <button type="button" class="btn line" onClick={() => void undo()}>
            Undo: follow {wayOf(before.choice.speeds)} again
          </button>
        )}
      </div>
    </section>
  )
}

/** Whether the crew follows these speeds with the same car and sky. */
const isFollowed = (followed: FollowedChoice | null, { carId, skyId }: PlanAnswer, speeds: SpeedsInput): boolean =>
  followed !== null &&
  followed.carId === carId &&
  followed.skyId === skyId &&
  followed.speeds.kind === speeds.kind &&
  sectionsOf(followed.speeds) === sectionsOf(speeds)

const sinceText = (followed: FollowedChoice | null | undefined, { forPeople }: Planned): string =>
  `since ${clockAt(Date.parse(followed?.savedAt ?? ''), forPeople.budget.utcOffsetMin)}`

function standingText(followed: FollowedChoice | null | undefined, plan: Planned): string {
  if (followed === undefined) return 'What the crew follows is not known here yet.'
  if (followed === null) return 'Nothing is followed on this day yet.'
  return `The crew follows ${wayOf(followed.speeds)}, ${sinceText(followed, plan)}.`
}
