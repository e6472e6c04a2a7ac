import { useSignal } from '@preact/signals'
import type { Item } from '../api.ts'
import { dateIn } from '../format.ts'
import { emptyRace, lacksOf, raceOf, type RaceForm, type WindowForm } from '../race-form.ts'
import { choose } from '../state.ts'
import { SelectField, TextField } from './field.tsx'
import { Problems } from './problems.tsx'
import { SaveForm } from './save-form.tsx'
import { StopRows } from './stop-rows.tsx'

const ownZone = (): string => Intl.DateTimeFormat().resolvedOptions().timeZone
const DAY_MS = 86_400_000

/** A race of one day on a stored route, from a short form. */
export function AddRace({ routes }: { routes: Item[] }) {
  const form = useSignal<RaceForm>(emptyRace(dateIn(ownZone(), Date.now() + DAY_MS), ownZone(), routes[0]?.id ?? ''))
  const isChecked = useSignal(false)
  const set = (change: Partial<RaceForm>): void => {
    form.value = { ...form.value, ...change }
    isChecked.value = false
  }
  const { value } = form
  const route = value.route === '' ? (routes[0]?.id ?? '') : value.route
  const whole = { ...value, route }
  const lacks = lacksOf(whole)
  return (
    <details class="more" data-add="race-day">
      <summary>Make a race day on a route</summary>
      <div class="form">
        <TextField label="Name of the race" value={value.name} onChange={(name) => set({ name })} />
        <SelectField
          label="Route"
          value={route}
          options={
            routes.length === 0 ? [['', 'None stored yet']] : routes.map((item) => [item.id, item.name] as const)
          }
          onChange={(id) => set({ route: id })}
        />
        <div class="row2">
          <TextField label="Start" value={value.start} onChange={(start) => set({ start })} />
          <TextField label="Finish" value={value.finish} onChange={(finish) => set({ finish })} />
          <TextField label="Date" type="date" value={value.date} onChange={(date) => set({ date })} />
          <TextField label="Time zone" value={value.zone} list="zones" onChange={(zone) => set({ zone })} />
        </div>
        <Zones />
        <Window label="Driving hours" value={value.driving} onChange={(driving) => set({ driving })} />
        {value.charging.map((window, i) => (
          <Window
            label={i === 0 ? 'Morning charging' : 'Evening charging'}
            value={window}
            onChange={(next) => set({ charging: value.charging.map((old, j) => (j === i ? next : old)) })}
          />
        ))}
        <div class="row2">
          <TextField
            label="Opening charge, %"
            inputMode="decimal"
            value={value.openingPct}
            onChange={(openingPct) => set({ openingPct })}
          />
          <TextField
            label="Target at the end, %"
            inputMode="decimal"
            value={value.targetPct}
            onChange={(targetPct) => set({ targetPct })}
            hint="empty: none"
          />
        </div>
        <StopRows stops={value.stops} onChange={(stops) => set({ stops })} />
        {isChecked.value && lacks.length === 0 ? (
          <SaveForm
            kind="races"
            document={raceOf(whole)}
            name={value.name}
            onSaved={(race) => choose({ race, date: '' })}
          />
        ) : (
          <>
            {isChecked.value && (
              <Problems problems={lacks.map((lack) => ({ ...lack, detail: `needs ${lack.detail}` }))} />
            )}
            <button type="button" class="btn" onClick={() => (isChecked.value = true)}>
              Check the race day
            </button>
          </>
        )}
      </div>
    </details>
  )
}

interface WindowProps {
  label: string
  value: WindowForm
  onChange: (value: WindowForm) => void
}

const Window = ({ label, value, onChange }: WindowProps) => (
  <div class="row2">
    <TextField
      label={`${label} from`}
      type="time"
      value={value.from}
      onChange={(from) => onChange({ ...value, from })}
    />
    <TextField label="to" type="time" value={value.to} onChange={(to) => onChange({ ...value, to })} />
  </div>
)

const Zones = () => (
  <datalist id="zones">
    {Intl.supportedValuesOf('timeZone').map((zone) => (
      <option key={zone} value={zone} />
    ))}
  </datalist>
)
