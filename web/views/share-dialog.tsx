import { useSignal } from '@preact/signals'
import { useEffect, useRef } from 'preact/hooks'
import type { Refusal } from '../api.ts'
import { type RaceDay, revoke, share, sharesOf } from '../crew.ts'
import type { NewShare, Share } from '../crew-types.ts'
import { dayText } from '../format.ts'
import { Conflict } from './conflict.tsx'
import { TextField } from './field.tsx'
import { Qr } from './qr.tsx'

/** Links that open one day’s budget to whoever holds them: made, shown once, taken back. */
export function ShareDialog({ race, date, onClose }: RaceDay & { onClose: () => void }) {
  const box = useRef<HTMLDialogElement>(null)
  const name = useSignal('')
  const made = useSignal<NewShare | null>(null)
  const shares = useSignal<Share[]>([])
  const refused = useSignal<Refusal | null>(null)
  const load = async (): Promise<void> => {
    const answer = await sharesOf({ race, date })
    if (answer.value === undefined) refused.value = answer.refusal
    else shares.value = answer.value.filter((entry) => !entry.isRevoked)
  }
  useEffect(() => {
    box.current?.showModal()
    void load()
  }, [])
  const make = async (): Promise<void> => {
    const answer = await share({ race, date }, name.value.trim())
    refused.value = answer.refusal ?? null
    if (answer.value === undefined) return
    made.value = answer.value
    name.value = ''
    await load()
  }
  const takeBack = async (id: string): Promise<void> => {
    const answer = await revoke({ race, date }, id)
    refused.value = answer.refusal ?? null
    if (answer.value !== undefined && made.value?.id === id) made.value = null
    await load()
  }
  return (
    <dialog ref={box} aria-labelledby="share-title" onClose={onClose}>
      <div class="sech">
        <h2 id="share-title">Share {dayText(date)}</h2>
        <button type="button" class="quiet end" onClick={() => box.current?.close()}>
          Close
        </button>
      </div>
      {made.value === null ? (
        <form
          class="form"
          onSubmit={(event) => {
            event.preventDefault()
            if (name.value.trim() !== '') void make()
          }}
        >
          <TextField
            label="For whom"
            value={name.value}
            onChange={(text) => (name.value = text)}
            hint="Names the link, so that it can be taken back. It shows this day’s budget, nothing else."
          />
          <button type="submit" class="btn" disabled={name.value.trim() === ''}>
            Make a link
          </button>
        </form>
      ) : (
        <Made made={made.value} onNext={() => (made.value = null)} />
      )}
      {refused.value !== null && <Conflict refusal={refused.value} />}
      {shares.value.length > 0 && (
        <ul class="docs" aria-label="Open links">
          {shares.value.map((entry) => (
            <li key={entry.id}>
              <span>{entry.name}</span>
              <button
                type="button"
                class="quiet"
                aria-label={`Take back ${entry.name}`}
                onClick={() => void takeBack(entry.id)}
              >
                Take back
              </button>
            </li>
          ))}
        </ul>
      )}
    </dialog>
  )
}

function Made({ made, onNext }: { made: NewShare; onNext: () => void }) {
  return (
    <div class="form" role="status">
      <p>
        For <b>{made.name}</b>. The link is shown only now.
      </p>
      <Qr text={made.url} label={`QR code of the link for ${made.name}`} />
      <p class="address" data-share-url>
        {made.url}
      </p>
      {isOfThisMachine(made.url) && (
        <p class="note">Phones cannot reach this address: start the service with HOST and PUBLIC_URL set for them.</p>
      )}
      <button type="button" class="btn line" onClick={onNext}>
        Make another
      </button>
    </div>
  )
}

/** Whether an address leads back to whichever device opens it. */
const isOfThisMachine = (url: string): boolean =>
  ['localhost', '[::1]'].includes(new URL(url).hostname) || new URL(url).hostname.startsWith('127.')
