import type { Refusal } from '../api.ts'
import { Problems } from './problems.tsx'

/** Why something was not saved or removed, in plain words. */
export function Conflict({ refusal }: { refusal: Refusal }) {
  return (
    <div role="alert">
      <p>
        <b>{headline(refusal)}</b>
      </p>
      {refusal.errors.length === 0 && <p class="note">{refusal.detail}</p>}
      <Problems problems={refusal.errors} />
    </div>
  )
}

function headline({ status, code, title }: Refusal): string {
  if (code === 'no-contact') return 'Not done: no contact with the service. Nothing was changed.'
  if (status === 412) return 'Not done: somebody changed it in the meantime.'
  if (status === 428) return 'Not saved: there is one of this name already.'
  if (status === 413) return 'Not read: the file is over the limit.'
  return `Not done: ${title.charAt(0).toLowerCase()}${title.slice(1).replace(/\.$/, '')}.`
}
