import type { ComponentChildren } from 'preact'

interface FieldProps {
  label: string
  hint?: string
  children: ComponentChildren
}

/** A labelled control with its hint under it. */
export const Field = ({ label, hint, children }: FieldProps) => (
  <label class="field">
    <span>{label}</span>
    {children}
    {hint !== undefined && <small class="note">{hint}</small>}
  </label>
)

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
    <input {...attributes} autocomplete="off" value={value} onInput={(event) => onChange(event.currentTarget.value)} />
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
    <select value={value} onChange={(event) => onChange(event.currentTarget.value)}>
      {options.map(([key, text]) => (
        <option key={key} value={key} selected={key === value}>
          {text}
        </option>
      ))}
    </select>
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
    <input
      type="file"
      accept={accept}
      onChange={(event) => {
        const file = event.currentTarget.files?.[0]
        if (file !== undefined) onFile(file)
      }}
    />
  </Field>
)
