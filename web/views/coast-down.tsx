import '../style/coast.css'
import { useSignal } from '@preact/signals'
import { useEffect } from 'preact/hooks'
import { type Answer, type CoastDownAnswer, documentOf, readCoastDown, type Refusal } from '../api.ts'
import { bodyOf, coastQueryOf, EMPTY_COAST, missingAir } from '../coast-form.ts'
import { choice, lists } from '../state.ts'
import { CoastApply } from './coast-apply.tsx'
import { CoastFields } from './coast-fields.tsx'
import { CoastResult } from './coast-result.tsx'
import { Conflict } from './conflict.tsx'
import { FileField, SelectField } from './field.tsx'

/** Rolling and drag from a logged coast-down: car, air and file in, a sentence out. */
export function CoastDownView() {
  const carId = useSignal<string | null>(null)
  const form = useSignal(EMPTY_COAST)
  const file = useSignal<File | null>(null)
  const answer = useSignal<Answer<CoastDownAnswer> | null>(null)
  const isWorking = useSignal(false)
  const chosen = carId.value ?? choice.value.car
  const car = useCar(chosen)
  const missing = missingAir(form.value)
  const work = async (log: File): Promise<void> => {
    isWorking.value = true
    const got = await readCoastDown(log, coastQueryOf(form.value, chosen))
    isWorking.value = false
    if (file.value === log) answer.value = got
  }
  const { value: found } = answer
  return (
    <div class="set-up coast pad">
      <h1 class="title">Coast-down</h1>
      <p>Let the car roll out on a level road, both ways, and find its rolling and drag from the log.</p>
      <p class="note caution">
        On a closed road or with permission, by traffic law and the event’s rules. A second person logs; nobody types
        while driving. Motor and brakes off, from a good speed down to walking pace, in calm air.
      </p>
      <div class="form">
        <SelectField
          label="Car"
          value={chosen}
          options={(lists.value?.cars ?? []).map((item) => [item.id, item.name] as const)}
          onChange={(id) => {
            carId.value = id
            answer.value = null
          }}
        />
        <CoastFields
          form={form.value}
          carKg={car === null ? null : (bodyOf(car)?.massKg ?? null)}
          onChange={(next) => (form.value = next)}
        />
        <FileField
          label="Log of the runs"
          accept=".csv,.txt,.tsv,text/csv"
          hint="CSV with a line of headers: time (s), speed (km/h), run, direction (there, back) or heading."
          onFile={(log) => {
            file.value = log
            answer.value = null
          }}
        />
        {missing !== null && <p class="note">{missing}</p>}
        <button
          type="button"
          class="btn"
          disabled={file.value === null || missing !== null || isWorking.value}
          onClick={() => file.value !== null && void work(file.value)}
        >
          Find rolling and drag
        </button>
        <p class="note" role="status">
          {isWorking.value && `Working out ${file.value?.name}.`}
        </p>
        {found?.refusal !== undefined && <Refused refusal={found.refusal} file={file.value?.name ?? ''} />}
      </div>
      {found?.value !== undefined && (
        <>
          <CoastResult result={found.value.result} notices={found.value.notices} />
          {found.value.result.car !== null && (
            <CoastApply key={found.value} result={found.value.result} car={found.value.result.car} carDocument={car} />
          )}
        </>
      )}
      <nav class="links gap" aria-label="Back">
        <a href={`#/set-up${location.hash.replace(/^[^?]*/, '')}`}>Back to Set-up</a>
      </nav>
    </div>
  )
}

/** The stored document of a car, read again when the lists change; null until it is there. */
function useCar(id: string): object | null {
  const car = useSignal<object | null>(null)
  useEffect(() => {
    let isWanted = id !== ''
    if (isWanted) void documentOf('cars', id).then((got) => isWanted && (car.value = got.value?.document ?? null))
    return () => {
      isWanted = false
      car.value = null
    }
  }, [id, lists.value])
  return car.value
}

/** Why there is no figure: reasons in words where the runs do not identify it, else what is wrong with the file. */
function Refused({ refusal, file }: { refusal: Refusal; file: string }) {
  if (refusal.code !== 'cannot-fit')
    return (
      <div data-refused>
        <p>{file}:</p>
        <Conflict refusal={refusal} />
      </div>
    )
  return (
    <div data-refused role="alert">
      <p>
        <b>No figures: these runs do not tell rolling from drag.</b>
      </p>
      <ul class="plain">
        {refusal.errors.map(({ detail }) => (
          <li>{`${detail.charAt(0).toUpperCase()}${detail.slice(1)}.`}</li>
        ))}
      </ul>
    </div>
  )
}
