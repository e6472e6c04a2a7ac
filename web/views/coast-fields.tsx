import type { CoastForm } from '../coast-form.ts'
import { grouped } from '../format.ts'
import { TextField } from './field.tsx'

interface FieldsProps {
  form: CoastForm
  /** Mass of the chosen car, where it is known. [kg] */
  carKg: number | null
  onChange: (form: CoastForm) => void
}

/** The air at the test, and what else may be known beside the log. */
export function CoastFields({ form, carKg, onChange }: FieldsProps) {
  const set = (change: Partial<CoastForm>): void => onChange({ ...form, ...change })
  return (
    <>
      <fieldset>
        <legend>The air at the test</legend>
        <div class="row2">
          <TextField
            label="Temperature, °C"
            inputMode="decimal"
            value={form.temperatureC}
            onChange={(temperatureC) => set({ temperatureC })}
            hint="in the shade"
          />
          <TextField
            label="Pressure, hPa"
            inputMode="decimal"
            value={form.pressureHpa}
            onChange={(pressureHpa) => set({ pressureHpa })}
            hint="not at sea level"
          />
          <TextField
            label="Humidity, %"
            inputMode="decimal"
            value={form.humidityPct}
            onChange={(humidityPct) => set({ humidityPct })}
            hint="empty: 50"
          />
          <TextField
            label="Mass on the day, kg"
            inputMode="decimal"
            value={form.massKg}
            onChange={(massKg) => set({ massKg })}
            hint={carKg === null ? 'with crew and ballast' : `empty: the car’s ${grouped(carKg)}`}
          />
        </div>
      </fieldset>
      <details class="more">
        <summary>What the log does not say of road and wind</summary>
        <div class="form">
          <div class="row2">
            <TextField
              label="Slope, %"
              inputMode="decimal"
              value={form.gradePct}
              onChange={(gradePct) => set({ gradePct })}
              hint="up on the way there; empty: found from both ways"
            />
            <TextField
              label="Wind along, m/s"
              inputMode="decimal"
              value={form.windAlongMps}
              onChange={(windAlongMps) => set({ windAlongMps })}
              hint="against the runs there; empty: found from both ways"
            />
          </div>
          <label class="check">
            <input
              type="checkbox"
              checked={form.isAlternate}
              onChange={(event) => set({ isAlternate: event.currentTarget.checked })}
            />
            The runs go there and back in turn
          </label>
        </div>
      </details>
    </>
  )
}
