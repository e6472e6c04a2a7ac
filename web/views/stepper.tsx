import { useSignal } from '@preact/signals'
import { HIGHEST_KMH, LOWEST_KMH, typedSpeed } from '../choice.ts'
import { THIN } from '../format.ts'

interface StepperProps {
  label: string
  kmh: number
  onChange: (kmh: number) => void
}

const MINUS = '\u2212'

/** A speed in whole km/h: two wide buttons and a field to type in. */
export function Stepper({ label, kmh, onChange }: StepperProps) {
  const typed = useSignal<string | null>(null)
  const isWrong = typed.value !== null && typedSpeed(typed.value) === null
  const step = (by: number): void => {
    typed.value = null
    const next = Math.round(kmh) + by
    if (next >= LOWEST_KMH && next <= HIGHEST_KMH) onChange(next)
  }
  const type = (text: string): void => {
    typed.value = text
    const next = typedSpeed(text)
    if (next !== null && next !== kmh) onChange(next)
  }
  return (
    <div class="stepper" role="group" aria-label={label}>
      <button type="button" aria-label={`${label}: 1 km/h slower`} onClick={() => step(-1)}>
        {MINUS}1
      </button>
      <label>
        <span class="sr">{label}, km/h</span>
        <input
          inputMode="numeric"
          autocomplete="off"
          size={3}
          value={typed.value ?? String(Math.round(kmh))}
          aria-invalid={isWrong}
          onInput={(event) => type(event.currentTarget.value)}
          onBlur={() => (typed.value = null)}
          onKeyDown={(event) => {
            if (event.key === 'ArrowUp' || event.key === 'ArrowDown') {
              event.preventDefault()
              step(event.key === 'ArrowUp' ? 1 : -1)
            }
          }}
        />
        <span class="u">{THIN}km/h</span>
      </label>
      <button type="button" aria-label={`${label}: 1 km/h faster`} onClick={() => step(1)}>
        +1
      </button>
      {isWrong && (
        <p class="note wrong" role="alert">
          A whole number from {LOWEST_KMH} to {HIGHEST_KMH}.
        </p>
      )}
    </div>
  )
}
