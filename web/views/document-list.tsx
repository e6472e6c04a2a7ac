import { useSignal } from '@preact/signals'
import { type Item, type Kind, type Refusal, remove } from '../api.ts'
import { stampText } from '../format.ts'
import { loadLists } from '../state.ts'
import { Conflict } from './conflict.tsx'

interface ListProps {
  kind: Kind
  items: Item[]
  chosen?: string
  onChoose?: (id: string) => void
}

/** What is stored of one kind: to choose from, and to remove after a question. */
export function DocumentList({ kind, items, chosen, onChoose }: ListProps) {
  if (items.length === 0) return <p class="note">None yet.</p>
  return (
    <ul class="docs" data-kind={kind}>
      {items.map((item) => (
        <Row key={item.id} kind={kind} item={item} isChosen={item.id === chosen} onChoose={onChoose} />
      ))}
    </ul>
  )
}

interface RowProps {
  kind: Kind
  item: Item
  isChosen: boolean
  onChoose?: (id: string) => void
}

function Row({ kind, item, isChosen, onChoose }: RowProps) {
  const isAsking = useSignal(false)
  const what = (
    <span>
      {item.name}
      <br />
      <span class="note">
        {item.id}, version {item.version}, {stampText(item.savedAt)} UTC
      </span>
    </span>
  )
  return (
    <li>
      {onChoose === undefined ? (
        what
      ) : (
        <label>
          <input type="radio" name={kind} checked={isChosen} onChange={() => onChoose(item.id)} />
          {what}
        </label>
      )}
      {isAsking.value ? (
        <Ask kind={kind} item={item} onDone={() => (isAsking.value = false)} />
      ) : (
        <button type="button" class="quiet" aria-label={`Remove ${item.name}`} onClick={() => (isAsking.value = true)}>
          Remove
        </button>
      )}
    </li>
  )
}

function Ask({ kind, item, onDone }: { kind: Kind; item: Item; onDone: () => void }) {
  const refused = useSignal<Refusal | null>(null)
  const go = async (): Promise<void> => {
    const answer = await remove(kind, item)
    refused.value = answer.refusal ?? null
    if (answer.refusal === undefined || answer.refusal.status === 404) await loadLists()
  }
  return (
    <div class="ask" role="group" aria-label={`Remove ${item.name}`}>
      <p>Remove {item.name}? Its versions are kept in the store, but it can no longer be chosen.</p>
      {refused.value !== null && <Conflict refusal={refused.value} />}
      <div class="row2">
        <button type="button" class="btn small" onClick={() => void go()}>
          Remove it
        </button>
        <button type="button" class="btn line small" onClick={onDone}>
          Keep it
        </button>
      </div>
    </div>
  )
}
