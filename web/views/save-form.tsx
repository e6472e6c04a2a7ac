import { useSignal } from '@preact/signals'
import { documentOf, type Kind, type Notice, type Refusal, save } from '../api.ts'
import { slugOf } from '../format.ts'
import { askAgain, lists, loadLists } from '../state.ts'
import { Conflict } from './conflict.tsx'
import { TextField } from './field.tsx'
import { Notices } from './problems.tsx'

interface SaveProps {
  kind: Kind
  document: object
  name: string
  /** What the document was taken from, so that a change by somebody else in the meantime is noticed. */
  replaces?: Known
  onSaved?: (id: string) => void
}

/** A stored document as it was last seen here. */
export interface Known {
  id: string
  version: number
}

/** Names a document and saves it; a name that is taken is explained, and may be replaced or passed by. */
export function SaveForm({ kind, document, name: given, replaces, onSaved }: SaveProps) {
  const name = useSignal(given)
  const known = useSignal<Known | null>(replaces ?? null)
  const id = useSignal<string | null>(replaces?.id ?? null)
  const refused = useSignal<Refusal | null>(null)
  const done = useSignal<{ text: string; notices: Notice[] } | null>(null)
  const slug = id.value ?? slugOf(name.value)

  const put = async (to: string, version: number | null): Promise<void> => {
    const answer = await save(kind, to, { ...document, name: name.value }, version)
    refused.value = answer.refusal ?? null
    if (answer.value === undefined) return
    known.value = { id: to, version: answer.value.version }
    done.value = { text: `Saved as ${to}, version ${answer.value.version}.`, notices: answer.value.notices ?? [] }
    await loadLists()
    onSaved?.(to)
    askAgain()
  }
  const replace = async (): Promise<void> => {
    const current = await documentOf(kind, slug)
    if (current.value === undefined) refused.value = current.refusal
    else await put(slug, current.value.version)
  }
  const isTaken = refused.value?.status === 428 || refused.value?.status === 412
  return (
    <div class="form">
      <div class="row2">
        <TextField label="Name" value={name.value} onChange={(text) => (name.value = text)} />
        <TextField label="Short name" value={slug} onChange={(text) => (id.value = text)} hint="a–z, 0–9, hyphens" />
      </div>
      {refused.value !== null && <Conflict refusal={refused.value} />}
      {isTaken ? (
        <div class="steps two">
          <button type="button" class="btn" onClick={() => void replace()}>
            Replace it
          </button>
          <button type="button" class="btn line" onClick={() => void keepBoth(kind, slug, id, put)}>
            Keep both
          </button>
        </div>
      ) : (
        <button
          type="button"
          class="btn"
          onClick={() => void put(slug, known.value?.id === slug ? known.value.version : null)}
        >
          Save
        </button>
      )}
      <div role="status">
        {done.value !== null && refused.value === null && (
          <>
            <p>
              <b>{done.value.text}</b>
            </p>
            <Notices items={done.value.notices} />
          </>
        )}
      </div>
    </div>
  )
}

/** Saves under the next free short name: saltpan-2, saltpan-3. */
async function keepBoth(
  kind: Kind,
  slug: string,
  id: { value: string | null },
  put: (to: string, version: null) => Promise<void>,
): Promise<void> {
  const taken = new Set(lists.value?.[kind].map((item) => item.id))
  let number = 2
  while (taken.has(`${slug}-${number}`)) number++
  id.value = `${slug}-${number}`
  await put(id.value, null)
}
