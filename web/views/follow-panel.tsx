import { useSignal } from '@preact/signals'
import type { ComponentType } from 'preact'
import type { DayBudget } from '../../server/documents/budget.ts'
import type { Refusal } from '../api.ts'
import { follow } from '../crew.ts'
import { isSame, wayOf } from '../choice.ts'
import { followedOn, loadFollowed } from '../crew-state.ts'
import type { FollowedChoice } from '../crew-types.ts'
import { clockAt } from '../format.ts'
import { choice, show } from '../state.ts'
import { Conflict } from './conflict.tsx'

type ShareDialog = ComponentType<{ race: string; date: string; onClose: () => void }>

/** What the crew follows on this day, and how to make it what is shown. */
export function FollowPanel({ day }: { day: DayBudget }) {
  const refused = useSignal<Refusal | null>(null)
  const { race, date, car: carId, sky: skyId, speeds } = choice.value
  const known = followedOn({ race, date })
  if (known === null || day.date !== date) return null
  const isShown = isSame(choice.value, known.choice)
  const put = async (): Promise<void> => {
    const answer = await follow({ race, date }, { carId, skyId, speeds }, known.choice?.version ?? null)
    refused.value = answer.refusal ?? null
    await loadFollowed({ race, date })
  }
  return (
    <div class="follow" id="follow">
      <p class="note">{wordsOf(known.choice, isShown, day.utcOffsetMin)}</p>
      {refused.value !== null && <Conflict refusal={refused.value} />}
      <div class={known.choice === null || isShown ? 'steps' : 'steps two'}>
        {isShown ? (
          <ShareButton race={race} date={date} />
        ) : (
          <button type="button" class="btn" onClick={() => void put()}>
            Follow this
          </button>
        )}
        {known.choice !== null && !isShown && (
          <button type="button" class="btn line" onClick={() => known.choice !== null && show(known.choice)}>
            Show what is followed
          </button>
        )}
      </div>
    </div>
  )
}

function wordsOf(followed: FollowedChoice | null, isShown: boolean, offsetMin: number): string {
  if (followed === null)
    return 'Nothing is followed on this day yet: readings move, and shared links show, what is followed.'
  const since = `since ${clockAt(Date.parse(followed.savedAt), offsetMin)}`
  if (isShown) return `The crew follows this, ${since}.`
  return `A try. The crew follows ${wayOf(followed.speeds)}, ${since}.`
}

/** The dialog with its QR code is fetched when it is first asked for. */
function ShareButton({ race, date }: { race: string; date: string }) {
  const Dialog = useSignal<{ View: ShareDialog } | null>(null)
  const isOpen = useSignal(false)
  const open = async (): Promise<void> => {
    Dialog.value ??= { View: (await import('./share-dialog.tsx')).ShareDialog }
    isOpen.value = true
  }
  return (
    <>
      <button type="button" class="btn line" onClick={() => void open()}>
        Share this day
      </button>
      {isOpen.value && Dialog.value !== null && (
        <Dialog.value.View race={race} date={date} onClose={() => (isOpen.value = false)} />
      )}
    </>
  )
}
