import { useSignal } from '@preact/signals'
import { type Answer, type ReadSky, readSky } from '../api.ts'
import { fileType, headerOf } from '../files.ts'
import { stampText } from '../format.ts'
import { emptySky, skyFacts, type SkyForm, skyOptions } from '../sky-form.ts'
import { choose } from '../state.ts'
import { Conflict } from './conflict.tsx'
import { FileField } from './field.tsx'
import { Notices } from './problems.tsx'
import { SaveForm } from './save-form.tsx'
import { SkyOptions } from './sky-options.tsx'

interface Chosen {
  file: File
  headers: string[]
}

/** A sky from a weather table: what the table does not say itself is asked, then read, then saved. */
export function AddSky() {
  const chosen = useSignal<Chosen | null>(null)
  const form = useSignal<SkyForm | null>(null)
  const answer = useSignal<Answer<ReadSky> | null>(null)
  const isReading = useSignal(false)

  const read = async (file: File, said: SkyForm): Promise<void> => {
    isReading.value = true
    const isTable = fileType(file.name) === 'text/csv'
    const got = await readSky(file, fileType(file.name), isTable ? skyOptions(said) : null)
    if (chosen.value?.file !== file) return
    isReading.value = false
    answer.value = got
  }
  const take = async (file: File): Promise<void> => {
    const said = emptySky(file.name, Date.now(), -new Date().getTimezoneOffset())
    chosen.value = { file, headers: fileType(file.name) === 'text/csv' ? await headerOf(file) : [] }
    form.value = said
    answer.value = null
    await read(file, said)
  }
  const { value: said } = form
  const { value: pick } = chosen
  return (
    <details class="more" data-add="skies">
      <summary>Add a sky from a weather table</summary>
      <div class="form">
        <FileField
          label="Weather file"
          accept=".csv,.txt,.tsv,.json"
          hint="CSV with a line of headers: time, air temperature, cloud cover or irradiance, wind."
          onFile={(file) => void take(file)}
        />
        {pick !== null && said !== null && pick.headers.length > 0 && (
          <>
            <SkyOptions form={said} headers={pick.headers} onChange={(next) => (form.value = next)} />
            <button type="button" class="btn" onClick={() => void read(pick.file, said)}>
              Read the table
            </button>
          </>
        )}
        <p class="note" role="status">
          {isReading.value && `Reading ${pick?.file.name}.`}
        </p>
        {answer.value?.refusal !== undefined && (
          <div data-refused>
            <p>{pick?.file.name}:</p>
            <Conflict refusal={answer.value.refusal} />
            {answer.value.refusal.status === 422 && (
              <p>
                Say above what the table does not: what a value speaks for, its offset, its place, its columns. Then
                read it again.
              </p>
            )}
          </div>
        )}
        {answer.value?.value !== undefined && <Preview read={answer.value.value} file={pick?.file.name ?? ''} />}
      </div>
    </details>
  )
}

function Preview({ read, file }: { read: ReadSky; file: string }) {
  const facts = skyFacts(read.document)
  return (
    <div class="preview" data-preview>
      <p>
        <b>{file}</b> is readable. Nothing is stored yet.
      </p>
      <dl>
        <dt>Places</dt>
        <dd>{facts.places}</dd>
        <dt>From</dt>
        <dd>{stampText(facts.from)}</dd>
        <dt>To</dt>
        <dd>{stampText(facts.to)}</dd>
      </dl>
      <p class="note">Columns: {facts.columns.join(', ')}.</p>
      <Notices items={read.notices} />
      <SaveForm
        key={read.document.name}
        kind="skies"
        document={read.document}
        name={read.document.name}
        onSaved={(sky) => choose({ sky })}
      />
    </div>
  )
}
