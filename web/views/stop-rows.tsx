import type { StopForm } from '../race-form.ts'
import { TextField } from './field.tsx'

interface StopsProps {
  stops: StopForm[]
  onChange: (stops: StopForm[]) => void
}

/** Timed stops on the route: name, kilometre, minutes. */
export function StopRows({ stops, onChange }: StopsProps) {
  const change = (i: number, part: Partial<StopForm>): void =>
    onChange(stops.map((stop, j) => (j === i ? { ...stop, ...part } : stop)))
  return (
    <fieldset>
      <legend>Timed stops</legend>
      {stops.map((stop, i) => (
        <div class="stoprow">
          <TextField label={`Stop ${i + 1}`} value={stop.name} onChange={(name) => change(i, { name })} />
          <TextField label="at km" inputMode="decimal" value={stop.km} onChange={(km) => change(i, { km })} />
          <TextField
            label="min"
            inputMode="numeric"
            value={stop.minutes}
            onChange={(minutes) => change(i, { minutes })}
          />
          <button
            type="button"
            class="quiet"
            aria-label={`Take out stop ${i + 1}`}
            onClick={() => onChange(stops.filter((_, j) => j !== i))}
          >
            Take out
          </button>
        </div>
      ))}
      <button
        type="button"
        class="btn line small"
        onClick={() => onChange([...stops, { name: '', km: '', minutes: '30' }])}
      >
        Add a stop
      </button>
    </fieldset>
  )
}
