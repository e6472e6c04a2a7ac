import type { Problem } from '../../server/documents/problem.ts'
import type { Notice } from '../api.ts'

/** What is wrong, one entry each: place in the file, field, what stood there, what was expected. */
export function Problems({ problems }: { problems: Problem[] }) {
  if (problems.length === 0) return null
  return (
    <ol class="problems">
      {problems.map((problem) => (
        <li>
          <b>{placeOf(problem)}</b> {problem.detail}
          {problem.value !== undefined && <span class="q"> Found {problem.value}.</span>}
        </li>
      ))}
    </ol>
  )
}

/** Line 14, column 3, airTempC: */
function placeOf({ line, column, field }: Partial<Problem>): string {
  const place = line === undefined ? [] : [`Line ${line}`, ...(column === undefined ? [] : [`column ${column}`])]
  const words = [...place, ...(field === undefined || field === '' ? [] : [field])]
  return words.length === 0 ? '' : `${words.join(', ')}:`
}

/** What was noticed and needs no action. */
export function Notices({ items }: { items: Notice[] }) {
  if (items.length === 0) return null
  return (
    <ul class="plain note notices">
      {items.map((item) => (
        <li>
          {placeOf(item)} {item.detail}
        </li>
      ))}
    </ul>
  )
}
