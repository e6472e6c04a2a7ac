import { ageAmount, dayText, grouped, THIN } from '../format.ts'
import { type AtWork, atWork, order, promisePct, type RacePlanDay, takeBack, targetText } from '../plan-state.ts'
import { chanceText, typedPct } from '../plan-words.ts'
import { nowMs } from '../shown.ts'
import { worked } from '../state.ts'
import { SelectField, TextField } from './field.tsx'

const PROMISES = [1, 2, 5, 10, 20]

/** What is wanted of the plan, the order, and how far its work is. */
export function PlanAsk({ day }: { day: RacePlanDay }) {
  const isWrong = typedPct(targetText.value) === undefined
  const working = atWork.value
  return (
    <section class="sec pad ask" aria-labelledby="ask-title">
      <div class="sech">
        <h2 id="ask-title">Plan {dayText(day.date)}</h2>
      </div>
      <div class="form">
        <div class="row2">
          <TextField
            label="Charge at the close, %"
            inputMode="decimal"
            value={targetText.value}
            onChange={(text) => (targetText.value = text)}
            hint={isWrong ? 'A number from 0 to 100.' : usualText(day.date)}
          />
          <SelectField
            label="May touch the reserve"
            value={String(promisePct.value)}
            options={PROMISES.map((pct) => [String(pct), chanceText(pct)] as const)}
            onChange={(pct) => (promisePct.value = Number(pct))}
            hint="for the steady plan"
          />
        </div>
        {working === null ? (
          <button type="button" class="btn" disabled={isWrong} onClick={() => void order(day)}>
            Plan this day
          </button>
        ) : (
          <Work
            of={working}
            note="so far; a long day takes about half a minute."
            onBack={() => void takeBack(working.id)}
          />
        )}
      </div>
    </section>
  )
}

/** The target that holds where none is typed, as far as the day's budget has told it. */
function usualText(date: string): string {
  const day = worked.value?.day
  if (day === undefined || day.date !== date) return 'left empty: as the race says'
  const { target, reserve } = day
  return target === null
    ? `left empty: the reserve, ${grouped(reserve.chargePct)}${THIN}%`
    : `left empty: the race’s ${grouped(target.chargePct)}${THIN}%`
}

interface WorkProps {
  of: Pick<AtWork, 'step' | 'share' | 'sinceMs'>
  /** What is said behind the time that it has taken. */
  note: string
  onBack: () => void
}

/** How far the work is: solid is done, ruling is to come. */
export function Work({ of, note, onBack }: WorkProps) {
  const { text, unit } = ageAmount(nowMs.value - of.sinceMs)
  const tenths = Math.round(of.share * 10)
  return (
    <div class="work" id="plan-work">
      <svg width="100%" height="14" aria-hidden="true">
        <rect x="0.75" y="0.75" width="98.5%" height="12.5" fill="url(#rule-out-bar)" stroke="var(--ink)" />
        <rect x="0.75" y="0.75" width={`${of.share * 98.5}%`} height="12.5" fill="var(--ink)" />
      </svg>
      <p role="status">
        {of.step}, {tenths} of 10 parts done.
      </p>
      <p class="note">
        {text}
        {THIN + unit} {note}
      </p>
      <button type="button" class="btn line small" onClick={onBack}>
        Take it back
      </button>
    </div>
  )
}
