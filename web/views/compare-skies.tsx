import { useSignal } from '@preact/signals'
import type { SkyComparison } from '../../server/documents/sky-comparison.ts'
import { type Answer, compareSkies, type Item } from '../api.ts'
import { placeSentence, worthSentence } from '../comparison-words.ts'
import { dayText } from '../format.ts'
import { choice, isComplete } from '../state.ts'
import { ByTime, DayEnergies, Scores, WorthTable } from './compare-tables.tsx'
import { Conflict } from './conflict.tsx'
import { SelectField } from './field.tsx'

/** Two stored skies beside each other: how far one was from the other, and what that is worth. */
export function CompareSkies({ skies }: { skies: Item[] }) {
  const forecast = useSignal(choice.value.sky)
  const measured = useSignal('')
  const isWorthWanted = useSignal(false)
  const isWorking = useSignal(false)
  const answer = useSignal<Answer<SkyComparison> | null>(null)
  const options = [['', 'choose'], ...skies.map(({ id, name }) => [id, name] as const)] as const
  const { car, race, date, speeds } = choice.value
  const compare = async (): Promise<void> => {
    isWorking.value = true
    const day = { car: { id: car }, race: { id: race }, speeds, date }
    const got = await compareSkies({
      forecast: { id: forecast.value },
      measured: { id: measured.value },
      ...(isWorthWanted.value ? { day } : {}),
    })
    isWorking.value = false
    answer.value = got
  }
  const isReady = forecast.value !== '' && measured.value !== '' && !isWorking.value
  return (
    <details class="more" data-compare>
      <summary>Compare a forecast with what was measured</summary>
      <div class="form">
        <div class="row2">
          <SelectField
            label="Forecast"
            value={forecast.value}
            options={options}
            onChange={(id) => (forecast.value = id)}
          />
          <SelectField
            label="Measured"
            value={measured.value}
            options={options}
            onChange={(id) => (measured.value = id)}
          />
        </div>
        {isComplete.value && (
          <label class="check">
            <input
              type="checkbox"
              checked={isWorthWanted.value}
              onChange={(event) => (isWorthWanted.value = event.currentTarget.checked)}
            />
            What it is worth on {dayText(date)}, the day shown
          </label>
        )}
        <button type="button" class="btn" disabled={!isReady} onClick={() => void compare()}>
          Compare
        </button>
        <p class="note" role="status">
          {isWorking.value && 'Comparing.'}
        </p>
        {answer.value?.refusal !== undefined && <Conflict refusal={answer.value.refusal} />}
        {answer.value?.value !== undefined && <Comparison comparison={answer.value.value} />}
      </div>
    </details>
  )
}

function Comparison({ comparison }: { comparison: SkyComparison }) {
  const { places, notes, worth, forecast, measured } = comparison
  return (
    <div class="preview" data-comparison>
      <p class="note">
        {forecast.name} less {measured.name}: above zero the forecast had more.
      </p>
      {worth !== null && (
        <>
          <p>
            <b>{worthSentence(worth)}</b>
          </p>
          <WorthTable worth={worth} />
        </>
      )}
      {places.map((place) => (
        <section class="preview" key={place.name} aria-label={place.name}>
          <p>
            <b>{placeSentence(place)}</b>
          </p>
          <Scores place={place} />
          <DayEnergies place={place} />
          <ByTime
            title="By hour of the day"
            rows={place.byHour.map(({ hour, scores }) => ({ text: `${hour}–${hour + 1}`, scores }))}
          />
          <ByTime
            title="By time since the issue"
            rows={place.byLead.map(({ fromH, toH, scores }) => ({
              text: toH === null ? `over ${fromH} h` : `${fromH}–${toH} h`,
              scores,
            }))}
          />
        </section>
      ))}
      {notes.map((text) => (
        <p key={text} class="note">
          {text}
        </p>
      ))}
    </div>
  )
}
