import type { ComponentChildren } from 'preact'
import { useId } from 'preact/hooks'

interface Named {
  id: string
  'aria-describedby'?: string
}

interface FieldProps {
  label: string
  hint?: string
  /** The control, given the id and description that tie it to its label and hint. */
  children: (named: Named) => ComponentChildren
}

/** A labelled control with its hint under it. */
export function Field({ label, hint, children }: FieldProps) {
  const id = useId()
  const hintId = `${id}-hint`
  return (
    <div class="field">
      <label for={id}>{label}</label>
      {children(hint === undefined ? { id } : { id, 'aria-describedby': hintId })}
      {hint !== undefined && (
        <small class="note" id={hintId}>
          {hint}
        </small>
      )}
    </div>
  )
}

interface TextProps {
  label: string
  value: string
  onChange: (value: string) => void
  hint?: string
}

/** What else the browser may know about the text. */
type Attributes = { type?: 'text'; list?: string; inputMode?: 'numeric' | 'decimal' } | { type: 'date' | 'time' }

export const TextField = ({ label, value, onChange, hint, ...attributes }: TextProps & Attributes) => (
  <Field label={label} hint={hint}>
    {(named) => (
      <input
        {...attributes}
        {...named}
        autocomplete="off"
        value={value}
        onInput={(event) => onChange(event.currentTarget.value)}
      />
    )}
  </Field>
)

interface SelectProps {
  label: string
  value: string
  options: readonly (readonly [value: string, text: string])[]
  onChange: (value: string) => void
  hint?: string
}

export const SelectField = ({ label, value, options, onChange, hint }: SelectProps) => (
  <Field label={label} hint={hint}>
    {(named) => (
      <select {...named} value={value} onChange={(event) => onChange(event.currentTarget.value)}>
        {options.map(([key, text]) => (
          <option key={key} value={key} selected={key === value}>
            {text}
          </option>
        ))}
      </select>
    )}
  </Field>
)

interface FileProps {
  label: string
  accept: string
  hint: string
  onFile: (file: File) => void
}

export const FileField = ({ label, accept, hint, onFile }: FileProps) => (
  <Field label={label} hint={hint}>
    {(named) => (
      <input
        {...named}
        type="file"
        accept={accept}
        onChange={(event) => {
          const file = event.currentTarget.files?.[0]
          if (file !== undefined) onFile(file)
        }}
      />
    )}
  </Field>
)
