import { useSignal } from '@preact/signals'
import { type Answer, documentOf, exampleOf, type Item, type Kind, type Refusal } from '../api.ts'
import { download } from '../download.ts'
import { parseDocument } from '../json-document.ts'
import { Conflict } from './conflict.tsx'
import { Field, FileField, SelectField } from './field.tsx'
import { Problems } from './problems.tsx'
import { type Known, SaveForm } from './save-form.tsx'

interface JsonProps {
  kind: Kind
  word: 'car' | 'race'
  items: Item[]
  onSaved: (id: string) => void
}

/** A document as JSON: from a file, typed, from the worked example or from one that is stored. */
export function JsonDocument({ kind, word, items, onSaved }: JsonProps) {
  const text = useSignal('')
  const known = useSignal<Known | undefined>(undefined)
  const refused = useSignal<Refusal | null>(null)
  const parsed = text.value.trim() === '' ? null : parseDocument(text.value)
  const document = parsed !== null && 'document' in parsed ? parsed.document : null
  const from = async (id: string): Promise<void> => {
    const got = id === '' ? asNew(await exampleOf(word)) : await documentOf(kind, id)
    refused.value = got.refusal ?? null
    if (got.value === undefined) return
    const { document: found, version } = got.value
    known.value = version === null ? undefined : { id, version }
    text.value = JSON.stringify(found, null, 2)
  }
  return (
    <details class="more" data-add={kind}>
      <summary>Add or change a {word} as JSON</summary>
      <div class="form">
        <FileField
          label={`File of the ${word}`}
          accept=".json,application/json"
          hint="A JSON document; every field is explained in the docs."
          onFile={(file) => void file.text().then((content) => (text.value = content))}
        />
        <SelectField
          label="Or start from"
          value="-"
          options={[
            ['-', 'Choose one'],
            ['', 'The worked example'],
            ...items.map((item) => [item.id, item.name] as const),
          ]}
          onChange={(id) => id !== '-' && void from(id)}
        />
        {refused.value !== null && <Conflict refusal={refused.value} />}
        <Field label={`The ${word} as JSON`}>
          {(named) => (
            <textarea
              {...named}
              spellcheck={false}
              value={text.value}
              aria-invalid={parsed !== null && document === null}
              onInput={(event) => (text.value = event.currentTarget.value)}
            />
          )}
        </Field>
        {parsed !== null && 'problem' in parsed && <Problems problems={[parsed.problem]} />}
        {document !== null && (
          <>
            <button type="button" class="quiet" onClick={() => download(`${word}.json`, text.value)}>
              Download this text
            </button>
            <SaveForm
              key={`${known.value?.id} ${known.value?.version}`}
              kind={kind}
              document={document}
              name={typeof document.name === 'string' ? document.name : ''}
              replaces={known.value}
              onSaved={onSaved}
            />
          </>
        )}
      </div>
    </details>
  )
}

/** A worked example is a document that nobody has stored yet. */
const asNew = ({ value, refusal }: Answer<object>): Answer<{ document: object; version: null }> =>
  value === undefined ? { refusal } : { value: { document: value, version: null } }
