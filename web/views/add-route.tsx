import { useSignal } from '@preact/signals'
import { type Answer, type ReadRoute, readRoute } from '../api.ts'
import { fileType } from '../files.ts'
import { grouped, kmText } from '../format.ts'
import { Conflict } from './conflict.tsx'
import { Wh } from './figures.tsx'
import { FileField } from './field.tsx'
import { Notices } from './problems.tsx'
import { SaveForm } from './save-form.tsx'

interface Read {
  file: string
  answer: Answer<ReadRoute>
}

/** A route from a GPX or CSV file: read first, shown with what was found, then saved. */
export function AddRoute() {
  const reading = useSignal<string | null>(null)
  const read = useSignal<Read | null>(null)
  const take = async (file: File): Promise<void> => {
    reading.value = file.name
    read.value = null
    const answer = await readRoute(file, fileType(file.name))
    if (reading.value !== file.name) return
    reading.value = null
    read.value = { file: file.name, answer }
  }
  const found = read.value
  return (
    <details class="more" data-add="routes">
      <summary>Add a route from a file</summary>
      <div class="form">
        <FileField
          label="Route file"
          accept=".gpx,.csv,.txt,.json"
          hint="GPX 1.1 track or route, or CSV with latitude, longitude and, if known, height. Up to 100 000 points."
          onFile={(file) => void take(file)}
        />
        <p class="note" role="status">
          {reading.value !== null && `Reading ${reading.value}.`}
        </p>
        {found?.answer.refusal !== undefined && (
          <div data-refused>
            <p>{found.file}:</p>
            <Conflict refusal={found.answer.refusal} />
          </div>
        )}
        {found?.answer.value !== undefined && <Preview key={found.file} file={found.file} read={found.answer.value} />}
      </div>
    </details>
  )
}

function Preview({ file, read }: { file: string; read: ReadRoute }) {
  const { document, summary, notices } = read
  const { elevation } = document
  const places = summary?.places ?? []
  return (
    <div class="preview" data-preview>
      <p>
        <b>{file}</b> is readable. Nothing is stored yet.
      </p>
      <dl>
        <Fact label="Length" value={summary?.lengthKm} unit="km" text={kmText} />
        <Fact label="Points" value={summary?.points} unit="" text={grouped} />
        <Fact label="Climb as recorded" value={summary?.climbBeforeM} unit="m" text={grouped} />
        <Fact label="Climb after smoothing" value={summary?.climbAfterM} unit="m" text={grouped} />
      </dl>
      {elevation === undefined ? (
        <p class="note">No heights in the file: the road is taken as level.</p>
      ) : (
        <p class="note">Heights: {elevation.method}.</p>
      )}
      {places.length > 0 && (
        <p class="note">Places on it: {places.map((place) => `${place.name} at km ${kmText(place.km)}`).join(', ')}.</p>
      )}
      <Notices items={notices} />
      <SaveForm kind="routes" document={document} name={document.name} />
    </div>
  )
}

interface FactProps {
  label: string
  value: number | null | undefined
  unit: string
  text: (value: number) => string
}

const Fact = ({ label, value, unit, text }: FactProps) =>
  typeof value === 'number' ? (
    <>
      <dt>{label}</dt>
      <dd>
        <Wh text={text(value)} unit={unit} />
      </dd>
    </>
  ) : null
