import { FIELDS, type Meter, type Meters, unitOf, USUAL_CLASS_PCT } from '../log-reading.ts'
import { SelectField } from './field.tsx'

interface MetersProps {
  meters: Meter[]
  chosen: Meters
  onChange: (meters: Meters) => void
}

const LABELS = { inputV: 'Volts in', inputA: 'Amps in', outputV: 'Volts out', outputA: 'Amps out' }

/** Which meter read what: remembered, so that it is said once. */
export function LogMeters({ meters, chosen, onChange }: MetersProps) {
  if (meters.length === 0)
    return (
      <p class="note gap">
        The car names no meters: taken as {USUAL_CLASS_PCT.V} % for volts and {USUAL_CLASS_PCT.A} % for amps.
      </p>
    )
  return (
    <details class="more">
      <summary>
        <span>
          Meters <span class="note">{summaryOf(chosen)}</span>
        </span>
      </summary>
      <div class="row2">
        {FIELDS.map((field) => (
          <SelectField
            key={field}
            label={LABELS[field]}
            value={chosen[field] ?? ''}
            options={meters
              .filter((meter) => meter.measures === unitOf(field))
              .map((meter) => [meter.name, `${meter.name}, ${meter.accuracyPct} %`] as const)}
            onChange={(name) => onChange({ ...chosen, [field]: name })}
          />
        ))}
      </div>
    </details>
  )
}

const summaryOf = ({ inputV, inputA, outputV, outputA }: Meters): string =>
  `in ${[inputV, inputA].filter(Boolean).join(' and ')}, out ${[outputV, outputA].filter(Boolean).join(' and ')}`
