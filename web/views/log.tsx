import { useSignal } from '@preact/signals'
import { useEffect } from 'preact/hooks'
import { send } from '../crew.ts'
import { car, loadTrackers, news, trackers } from '../crew-state.ts'
import type { Answer } from '../api.ts'
import type { ReadingAnswer, ReadingDocument } from '../crew-types.ts'
import { figuresOf, metersFor, newId, NOTHING_TYPED, readingOf, swapped, type Typed } from '../log-reading.ts'
import { habitOf, keepHabit } from '../remembered.ts'
import { choice, lists } from '../state.ts'
import { LogFields } from './log-fields.tsx'
import { LogMeters } from './log-meters.tsx'
import { ReadingSight, ReadingVerdict } from './log-verdict.tsx'
import { Conflict } from './conflict.tsx'
import { Ruling } from './ruling.tsx'

/** A reading that went to the service, and what it said. */
interface Sent {
  reading: ReadingDocument
  answer: Answer<ReadingAnswer> | null
}

/** Four figures off a tracker: typed, seen against its curve at once, sent. */
export function LogView() {
  const { race, date, car: carId } = choice.value
  useEffect(() => {
    if (race !== '' && date !== '' && carId !== '') void loadTrackers({ race, date }, carId)
  }, [race, date, carId, news.value])
  const { value: known } = car
  if (lists.value !== null && (race === '' || carId === '')) return <NoCar />
  return (
    <div class="log">
      <h1 class="sr">Log a reading</h1>
      {known === null || known.id !== carId ? (
        <div class="pad">
          <Ruling />
        </div>
      ) : (
        <LogForm key={carId} known={known} race={race} />
      )}
    </div>
  )
}

const NoCar = () => (
  <div class="pad">
    <h1 class="say">No tracker to read yet.</h1>
    <p>A reading needs a race and a car; the Set-up has both.</p>
  </div>
)

function LogForm({ known, race }: { known: NonNullable<typeof car.value>; race: string }) {
  const habit = useSignal(habitOf(known.id))
  const typed = useSignal<Typed>(NOTHING_TYPED)
  const sent = useSignal<Sent | null>(null)
  const isTried = useSignal(false)
  const tracker = known.trackers.includes(habit.value.tracker) ? habit.value.tracker : known.trackers[0]
  const meters = metersFor(habit.value.meters, known.meters)
  const figures = figuresOf(typed.value)
  const report = trackers.value?.items.find((item) => item.name === tracker)
  const answered = sent.value?.answer?.value
  const keep = (change: Partial<typeof habit.value>): void => {
    habit.value = { tracker, meters, ...change }
    keepHabit(known.id, habit.value)
  }
  const submit = async (): Promise<void> => {
    isTried.value = true
    if (figures === null) return
    keep({})
    const last = sent.value?.reading
    const fresh = readingOf(figures, tracker, meters, [newId(), new Date().toISOString()])
    // Sent again after lost contact it is the same reading: the service takes it once.
    const reading = last !== undefined && isLike(last, fresh) ? last : fresh
    sent.value = { reading, answer: null }
    sent.value = { reading, answer: await send(race, known.id, reading) }
  }
  const next = (): void => {
    typed.value = NOTHING_TYPED
    sent.value = null
    isTried.value = false
  }
  const isSending = sent.value !== null && sent.value.answer === null
  return (
    <form
      class="pad"
      noValidate
      onSubmit={(event) => {
        event.preventDefault()
        if (answered !== undefined) next()
        else if (!isSending) void submit()
      }}
    >
      <LogFields
        trackers={known.trackers}
        tracker={tracker}
        typed={typed.value}
        isTried={isTried.value}
        isFixed={answered !== undefined || isSending}
        onTracker={(name) => keep({ tracker: name })}
        onType={(change) => (typed.value = { ...typed.value, ...change })}
      />
      <LogMeters meters={known.meters} chosen={meters} onChange={(next) => keep({ meters: next })} />
      <div class="hintbox" role="status">
        {answered === undefined
          ? figures !== null && <ReadingSight figures={figures} chosen={meters} meters={known.meters} report={report} />
          : sent.value !== null && <ReadingVerdict reading={sent.value.reading} answer={answered} report={report} />}
      </div>
      {sent.value?.answer?.refusal !== undefined && <NotSent refusal={sent.value.answer.refusal} />}
      <div class="steps">
        <button type="submit" class="btn" disabled={isSending}>
          {answered !== undefined ? 'Next reading' : isSending ? 'Sending' : 'Send reading'}
        </button>
        {answered?.verdict === 'far-off' && meters.inputA !== meters.outputA && (
          <button
            type="button"
            class="btn line"
            onClick={() => {
              keep({ meters: swapped(meters) })
              next()
            }}
          >
            Clamps swapped: read again
          </button>
        )}
      </div>
      <p class="note gap">Stored as volts and amps, never as a ratio.</p>
    </form>
  )
}

const isLike = (a: ReadingDocument, b: ReadingDocument): boolean =>
  JSON.stringify({ ...a, id: '', at: '' }) === JSON.stringify({ ...b, id: '', at: '' })

const NotSent = ({ refusal }: { refusal: NonNullable<Answer<object>['refusal']> }) =>
  refusal.status === 0 ? (
    <p class="gap" role="alert">
      <b>Not sent: no contact.</b> The figures stay here; send them again when in touch.
    </p>
  ) : (
    <Conflict refusal={refusal} />
  )
