import { SKY_FIELDS, type SkyForm } from '../sky-form.ts'
import { SelectField, TextField } from './field.tsx'

interface OptionsProps {
  form: SkyForm
  headers: string[]
  onChange: (form: SkyForm) => void
}

const AVERAGING = [
  ['', 'as its headers say'],
  ['preceding', 'the hour before its stamp'],
  ['following', 'the hour after its stamp'],
  ['instant', 'that instant'],
] as const

const PRESSURE = [
  ['', 'as its header says'],
  ['station', 'at the place'],
  ['sea-level', 'reduced to sea level'],
] as const

/** What a weather table may not say itself. */
export function SkyOptions({ form, headers, onChange }: OptionsProps) {
  const set = (change: Partial<SkyForm>): void => onChange({ ...form, ...change })
  return (
    <>
      <div class="row2">
        <SelectField
          label="Values are"
          value={form.source}
          options={[
            ['forecast', 'forecast'],
            ['measured', 'measured'],
          ]}
          onChange={(source) => set({ source: source === 'measured' ? 'measured' : 'forecast' })}
        />
        <TextField
          label="UTC offset of its times"
          value={form.utcOffset}
          onChange={(utcOffset) => set({ utcOffset })}
          hint="+02:00; empty: they carry it"
        />
        <TextField
          label="Issued, local time"
          value={form.issuedAt}
          onChange={(issuedAt) => set({ issuedAt })}
          hint="as 2026-10-16T18:00"
        />
        <SelectField
          label="A value speaks for"
          value={form.averaging}
          options={AVERAGING}
          onChange={(value) => set({ averaging: AVERAGING.find(([key]) => key === value)?.[0] ?? '' })}
        />
        <SelectField
          label="Pressure holds"
          value={form.pressureIs}
          options={PRESSURE}
          onChange={(value) => set({ pressureIs: PRESSURE.find(([key]) => key === value)?.[0] ?? '' })}
        />
      </div>
      <fieldset>
        <legend>Its one place, if no column says it</legend>
        <div class="row2">
          <TextField label="Place" value={form.placeName} onChange={(placeName) => set({ placeName })} />
          <TextField
            label="Height, m"
            inputMode="decimal"
            value={form.elevationM}
            onChange={(elevationM) => set({ elevationM })}
          />
          <TextField label="Latitude, ° north" value={form.latDeg} onChange={(latDeg) => set({ latDeg })} />
          <TextField label="Longitude, ° east" value={form.lonDeg} onChange={(lonDeg) => set({ lonDeg })} />
        </div>
      </fieldset>
      <Mapping form={form} headers={headers} onChange={onChange} />
    </>
  )
}

/** Which days of a typical year are wanted. */
export function YearOptions({ form, onChange }: Omit<OptionsProps, 'headers'>) {
  return (
    <>
      <p class="note">
        A typical year, not a forecast: the days below take the hours of the same days of the year, whatever year they
        come from.
      </p>
      <div class="row2">
        <TextField label="First day" type="date" value={form.from} onChange={(from) => onChange({ ...form, from })} />
        <TextField label="Last day" type="date" value={form.to} onChange={(to) => onChange({ ...form, to })} />
      </div>
    </>
  )
}

/** Which column is which, for headers that were not recognised. */
function Mapping({ form, headers, onChange }: OptionsProps) {
  const say = (header: string, change: { field?: string; unit?: string }): void => {
    const column = { ...(form.columns[header] ?? { field: '', unit: '' }), ...change }
    onChange({ ...form, columns: { ...form.columns, [header]: column } })
  }
  return (
    <details class="more">
      <summary>Say by hand what its columns are</summary>
      {headers.map((header) => (
        <div class="maprow" key={header}>
          <SelectField
            label={header}
            value={form.columns[header]?.field ?? ''}
            options={[['', 'as recognised'], ...SKY_FIELDS]}
            onChange={(field) => say(header, { field })}
          />
          <TextField
            label={`Unit of ${header}`}
            value={form.columns[header]?.unit ?? ''}
            onChange={(unit) => say(header, { unit })}
          />
        </div>
      ))}
    </details>
  )
}
