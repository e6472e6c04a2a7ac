import type { DayItem } from '../api.ts'
import { ageAmount, THIN } from '../format.ts'
import { wrongFields } from '../phone/here-form.ts'
import { fillIn, form, type HereDay, planHere, type, wantedText, work } from '../phone/here-state.ts'
import { typedPct } from '../plan-words.ts'
import { nowMs } from '../shown.ts'
import { SelectField, TextField } from './field.tsx'

const SOURCES = {
  budget: 'As the budget shown has it: change what the car’s own instruments say.',
  typed: 'As it was typed last on this phone.',
  nothing: '',
}

/** Where the car is, and the order to plan the rest of its day. */
export function HereAsk({ day, item }: { day: HereDay; item: DayItem }) {
  const { of, source } = form.value
  const wrong = wrongFields(of)
  const isTargetWrong = typedPct(wantedText.value) === undefined
  return (
    <form
      class="sec pad ask"
      aria-labelledby="here-title"
      noValidate
      onSubmit={(event) => {
        event.preventDefault()
        void planHere(day, item)
      }}
    >
      <div class="sech">
        <h2 id="here-title">Where the car is</h2>
        <button type="button" class="quiet" onClick={() => fillIn(item)}>
          By the budget, now
        </button>
      </div>
      <p class="note">{SOURCES[source]}</p>
      <div class="form">
        <SelectField
          label="Stage"
          value={of.stage}
          options={item.stages.map(({ id, name }) => [id, name] as const)}
          hint={wrong.stage}
          onChange={(stage) => type({ stage }, day)}
        />
        <div class="row2">
          <TextField
            label="Km from its start"
            inputMode="decimal"
            value={of.km}
            hint={wrong.km}
            onChange={(km) => type({ km }, day)}
          />
          <TextField
            label="Time"
            type="time"
            value={of.time}
            hint={wrong.time ?? `local, ${item.zone}`}
            onChange={(time) => type({ time }, day)}
          />
          <TextField
            label="Charge, %"
            inputMode="decimal"
            value={of.chargePct}
            hint={wrong.chargePct}
            onChange={(chargePct) => type({ chargePct }, day)}
          />
          <TextField
            label="Speed, km/h"
            inputMode="decimal"
            value={of.speedKmh}
            hint={wrong.speedKmh ?? '0 where it stands'}
            onChange={(speedKmh) => type({ speedKmh }, day)}
          />
          <TextField
            label="Stop left, min"
            inputMode="decimal"
            value={of.stopLeftMin}
            hint={wrong.stopLeftMin ?? 'only at a stop'}
            onChange={(stopLeftMin) => type({ stopLeftMin }, day)}
          />
          <TextField
            label="Charge at the close, %"
            inputMode="decimal"
            value={wantedText.value}
            hint={isTargetWrong ? 'A number from 0 to 100.' : 'left empty: as the race says'}
            onChange={(text) => (wantedText.value = text)}
          />
        </div>
        <button type="submit" class="btn" disabled={Object.keys(wrong).length > 0 || isTargetWrong}>
          Plan the rest of the day
        </button>
        {work.value !== null && <Work of={work.value} />}
      </div>
    </form>
  )
}

function Work({ of }: { of: NonNullable<typeof work.value> }) {
  const { text, unit } = ageAmount(nowMs.value - of.sinceMs)
  return (
    <p role="status" id="here-work" class="note">
      {of.step}, {Math.round(of.share * 10)} of 10 parts done, {text}
      {THIN + unit} so far.
    </p>
  )
}
