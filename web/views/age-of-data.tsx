import { answerFreshness, type Freshness, forecastFreshness } from '../age.ts'
import { Disc } from '../charts/disc.tsx'
import { ageAmount, clockAt, stampText } from '../format.ts'
import { nowMs } from '../shown.ts'
import type { Worked } from '../state.ts'
import { Wh } from './figures.tsx'

/** How old what the figures rest on is: always a symbol and a number. */
export function AgeOfData({ last }: { last: Omit<Worked, 'question'> }) {
  const { sky } = last.budget
  const skyMs = nowMs.value - Date.parse(sky.issuedAt)
  const answerMs = nowMs.value - last.atMs
  return (
    <section class="sec pad" aria-labelledby="age-title">
      <div class="sech">
        <h2 id="age-title">Age of the data</h2>
      </div>
      <ul class="ages">
        <Row age={forecastFreshness(skyMs)} ms={skyMs} text={`${sky.name}: ${skyText(sky)}`} />
        <Row
          age={answerFreshness(answerMs)}
          ms={answerMs}
          text={`Worked out ${clockAt(last.atMs, last.day.utcOffsetMin)}, ${last.budget.car}`}
        />
      </ul>
    </section>
  )
}

function skyText({ source, issuedAt }: Worked['budget']['sky']): string {
  if (source === 'typical') return 'a typical year, not a forecast'
  return `${source === 'measured' ? 'measured, read' : 'forecast, issued'} ${stampText(issuedAt)}`
}

function Row({ age, ms, text }: { age: Freshness; ms: number; text: string }) {
  const amount = ageAmount(ms)
  return (
    <li>
      <Disc age={age} />
      <span>{text}</span>
      <span class="nw">{ms < 0 ? 'ahead of this clock' : <Wh text={amount.text} unit={amount.unit} />}</span>
    </li>
  )
}
