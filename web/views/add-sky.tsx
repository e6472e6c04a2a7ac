import { useSignal } from '@preact/signals'
import { type Answer, type ReadSky, readSky, readYear } from '../api.ts'
import { fileType, headerOf, yearKindOf } from '../files.ts'
import { stampText } from '../format.ts'
import { emptySky, skyFacts, type SkyForm, skyOptions, yearOptions } from '../sky-form.ts'
import { choose, days } from '../state.ts'
import { Conflict } from './conflict.tsx'
import { FileField } from './field.tsx'
import { Notices } from './problems.tsx'
import { SaveForm } from './save-form.tsx'
import { SkyOptions, YearOptions } from './sky-options.tsx'

interface Chosen {
  file: File
  kind: 'epw' | 'tmy3' | 'other'
  headers: string[]
}

/** A sky from a weather table or a typical year: what the file does not say itself is asked, then read, then saved. */
export function AddSky() {
  const chosen = useSignal<Chosen | null>(null)
  const form = useSignal<SkyForm | null>(null)
  const answer = useSignal<Answer<ReadSky> | null>(null)
  const isReading = useSignal(false)

  const read = async ({ file, kind }: Pick<Chosen, 'file' | 'kind'>, said: SkyForm): Promise<void> => {
    isReading.value = true
    const got = await readAs(file, kind, said)
    if (chosen.value?.file !== file) return
    isReading.value = false
    answer.value = got
  }
  const take = async (file: File): Promise<void> => {
    const dates = days.value.map(({ date }) => date)
    const said = emptySky(file.name, Date.now(), -new Date().getTimezoneOffset(), dates)
    const kind = await yearKindOf(file)
    const isTable = kind === 'other' && fileType(file.name) === 'text/csv'
    chosen.value = { file, kind, headers: isTable ? await headerOf(file) : [] }
    form.value = said
    answer.value = null
    await read({ file, kind }, said)
  }
  const { value: said } = form
  const { value: pick } = chosen
  return (
    <details class="more" data-add="skies">
      <summary>Add a sky from a weather file</summary>
      <div class="form">
        <FileField
          label="Weather file"
          accept=".csv,.txt,.tsv,.json,.epw"
          hint="CSV with a line of headers: time, air temperature, cloud cover or irradiance, wind. Before there is a forecast: a typical year, as EPW or TMY3."
          onFile={(file) => void take(file)}
        />
        {pick !== null && said !== null && pick.headers.length > 0 && (
          <>
            <SkyOptions form={said} headers={pick.headers} onChange={(next) => (form.value = next)} />
            <button type="button" class="btn" onClick={() => void read(pick, said)}>
              Read the table
            </button>
          </>
        )}
        {pick !== null && said !== null && pick.kind !== 'other' && (
          <>
            <YearOptions form={said} onChange={(next) => (form.value = next)} />
            <button type="button" class="btn" onClick={() => void read(pick, said)}>
              Read these days
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
            {answer.value.refusal.status === 422 && pick?.kind === 'other' && (
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

function readAs(file: File, kind: Chosen['kind'], said: SkyForm): Promise<Answer<ReadSky>> {
  if (kind !== 'other') return readYear(file, kind, yearOptions(said))
  const type = fileType(file.name)
  return readSky(file, type, type === 'text/csv' ? skyOptions(said) : null)
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
