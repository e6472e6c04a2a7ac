import { dayText } from '../format.ts'
import { typedPct } from '../plan-words.ts'
import { closeOptions, datesIn, nightOf, type NightWish, type RaceDate, wantedBy } from '../race-wish.ts'
import { atWork, orderRace, raceDates, takeRaceBack, wish } from '../race-plan-state.ts'
import type { RaceSetting } from '../race-plans.ts'
import { SelectField, TextField } from './field.tsx'
import { Work } from './plan-ask.tsx'

/** Which days, which charges, the order, and how far its work is; folded away once there is a plan. */
export function RaceAsk({ setting, hasPlan }: { setting: RaceSetting; hasPlan: boolean }) {
  const working = atWork.value
  const isMine = working !== null && working.race === setting.race
  return (
    <section class="sec pad ask" aria-labelledby="race-ask-title">
      <div class="sech">
        <h2 id="race-ask-title">{hasPlan ? 'Plan again' : 'Plan the race'}</h2>
      </div>
      {isMine && working !== null ? (
        <Work
          of={working}
          note="so far; it goes on when you leave this page."
          onBack={() => void takeRaceBack(working.id)}
        />
      ) : hasPlan ? (
        <details>
          <summary>Other days or charges</summary>
          <Form setting={setting} />
        </details>
      ) : (
        <Form setting={setting} />
      )}
    </section>
  )
}

function Form({ setting }: { setting: RaceSetting }) {
  const days = raceDates.value
  const { fromDate, toDate, openingText } = wish.value
  const planned = datesIn(wish.value, days)
  const isWrong = wantedBy(wish.value, days) === null
  const dates = days.map(({ date }) => [date, dayText(date)] as const)
  const set = (more: Partial<typeof wish.value>): void => void (wish.value = { ...wish.value, ...more })
  return (
    <div class="form">
      <div class="row2">
        <SelectField
          label="First day"
          value={fromDate === '' ? (days[0]?.date ?? '') : fromDate}
          options={dates}
          onChange={(date) => set({ fromDate: date })}
        />
        <SelectField
          label="Last day"
          value={toDate === '' ? (days[days.length - 1]?.date ?? '') : toDate}
          options={dates}
          onChange={(date) => set({ toDate: date })}
        />
      </div>
      <TextField
        label="Charge when the first day opens, %"
        inputMode="decimal"
        value={openingText}
        onChange={(text) => set({ openingText: text })}
        hint={
          typedPct(openingText) === undefined
            ? 'A number from 0 to 100.'
            : 'left empty: what race and days before leave'
        }
      />
      {planned.length === 0 && <p role="alert">The last day comes before the first.</p>}
      <fieldset class="nights">
        <legend>Charge at the close of each day</legend>
        {planned.map((day, i) => (
          <Night key={day.date} day={day} isLast={i === planned.length - 1} />
        ))}
      </fieldset>
      <button type="button" class="btn" disabled={isWrong || days.length === 0} onClick={() => void orderRace(setting)}>
        Plan the race
      </button>
    </div>
  )
}

function Night({ day, isLast }: { day: RaceDate; isLast: boolean }) {
  const { date } = day
  const { kind, text } = nightOf(wish.value, date)
  const set = (night: NightWish): void =>
    void (wish.value = { ...wish.value, nights: { ...wish.value.nights, [date]: night } })
  const isWrong = kind === 'fixed' && typeof typedPct(text) !== 'number'
  return (
    <div class="row2">
      <SelectField
        label={dayText(date)}
        value={kind}
        options={closeOptions(day, isLast)}
        onChange={(value) => set({ kind: value === 'free' || value === 'fixed' ? value : 'race', text })}
      />
      {kind === 'fixed' && (
        <TextField
          label={`${dayText(date)}, %`}
          inputMode="decimal"
          value={text}
          onChange={(typed) => set({ kind, text: typed })}
          {...(isWrong ? { hint: 'A number from 0 to 100.' } : {})}
        />
      )}
    </div>
  )
}
