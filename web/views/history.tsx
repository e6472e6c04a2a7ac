import { moves, trackers } from '../crew-state.ts'
import { dayText, stampIn } from '../format.ts'
import { days } from '../state.ts'
import { moveText } from '../tracker-words.ts'

/** Which reading or choice moved which day’s close, newest first. */
export function History() {
  const { value: all } = trackers
  if (all === null || moves.value.length === 0) return null
  const zone = days.value[0]?.zone ?? 'UTC'
  return (
    <section class="sec pad" aria-labelledby="history-title">
      <div class="sech">
        <h2 id="history-title">What moved the days</h2>
      </div>
      <ul class="plain">
        {moves.value.map((move) => (
          <li>
            {dayText(move.date)}. {moveText(move, all)}{' '}
            <span class="note">{stampIn(zone, Date.parse(move.movedAt))}</span>
          </li>
        ))}
      </ul>
    </section>
  )
}
