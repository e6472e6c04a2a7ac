import type { Refusal } from '../api.ts'
import { ageAmount, clockAt, THIN } from '../format.ts'
import { nowMs } from '../shown.ts'
import { askAgain, choice, choose, lists, loadLists, refusal, type Worked } from '../state.ts'
import { Problems } from './problems.tsx'

const NAMES = { races: 'a race', cars: 'a car', skies: 'a sky' } as const
const KINDS = ['races', 'cars', 'skies'] as const

/** Nothing to work out yet: what is missing, what is in, one main step. */
export function Empty() {
  const { races = [], cars = [], skies = [] } = lists.value ?? {}
  const counts = { races: races.length, cars: cars.length, skies: skies.length }
  const missing = KINDS.filter((kind) => counts[kind] === 0).map((kind) => NAMES[kind])
  const present = KINDS.filter((kind) => counts[kind] > 0).map((kind) => NAMES[kind])
  return (
    <div class="pad">
      <h1 class="say">No budget yet.</h1>
      {missing.length > 0 ? (
        <p>
          Missing: {listed(missing)}. {present.length > 0 ? `Already in: ${listed(present)}.` : 'Nothing is in yet.'}
        </p>
      ) : (
        <p>This race has no days to work out.</p>
      )}
      <div class="steps">
        <button type="button" class="btn" onClick={() => choose({ view: 'set-up' })}>
          Set up {missing[0] ?? 'the race'}
        </button>
      </div>
    </div>
  )
}

const listed = (words: string[]): string =>
  words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} and ${words[words.length - 1]}`

/** The day could not be worked out: what failed, what is shown instead, how old that is, the way on. */
export function RefusedDay({ refusal: why, last }: { refusal: Refusal; last: Worked | null }) {
  const isLost = why.code === 'no-contact'
  return (
    <section class="pad refused" role="alert">
      <h2 class="say">
        {isLost ? 'The day could not be worked out: no contact.' : `Day not worked out: ${lower(why.title)}.`}
      </h2>
      {!isLost && why.errors.length === 0 && <p>{why.detail}</p>}
      <Problems problems={why.errors} />
      {last !== null && <Instead last={last} />}
      <div class="steps two">
        <button type="button" class="btn" onClick={tryAgain}>
          Try again
        </button>
        {!isLost && (
          <button type="button" class="btn line" onClick={() => choose({ view: 'set-up' })}>
            Open the set-up
          </button>
        )}
      </div>
    </section>
  )
}

const lower = (title: string): string => title.charAt(0).toLowerCase() + title.slice(1).replace(/\.$/, '')

function Instead({ last }: { last: Worked }) {
  const { text, unit } = ageAmount(nowMs.value - last.atMs)
  const isOther = last.day.date !== choice.value.date
  return (
    <p>
      Still shown: the answer of {clockAt(last.atMs, last.day.utcOffsetMin)}, <b>{text}</b>
      {THIN + unit} old{isOther && `, for ${last.day.date}`}.
    </p>
  )
}

function tryAgain(): void {
  refusal.value = null
  if (lists.value === null) void loadLists()
  else askAgain()
}
