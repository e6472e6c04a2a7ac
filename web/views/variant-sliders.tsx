import { useSignal } from '@preact/signals'
import { useEffect } from 'preact/hooks'
import { movedTo, SLIDERS, type Slider, sliderText, whatIfText } from '../phone/what-if-form.ts'
import type { PlanAnswer } from '../plan-types.ts'
import { lists } from '../state.ts'
import {
  askQuick,
  isAsking,
  moved,
  quick,
  quickRefusal,
  workOut,
  workOutMoved,
  workOutOther,
} from '../variant-state.ts'
import { typedSpeed } from '../choice.ts'
import { Conflict } from './conflict.tsx'
import { Field, SelectField, TextField } from './field.tsx'

/** Sliders with their quick answer, and the orders of variants in full. */
export function VariantSliders({ entry }: { entry: PlanAnswer }) {
  const isMoved = Object.keys(moved.value).length > 0
  useEffect(() => {
    if (isMoved) void askQuick(entry)
  }, [moved.value, entry.id])
  return (
    <>
      <p role="status" id="quick" aria-busy={isAsking.value} class={isAsking.value ? 'change waits' : 'change'}>
        {quickText(isMoved)}
      </p>
      {isMoved && quickRefusal.value !== null && <Conflict refusal={quickRefusal.value} />}
      {isMoved && (
        <div class="steps">
          <button type="button" class="btn" onClick={() => void workOutMoved(entry.id)}>
            Work it out
          </button>
          <button type="button" class="btn line" onClick={() => (moved.value = {})}>
            As planned
          </button>
        </div>
      )}
      <div class="sliders">
        {SLIDERS.map((slider) => (
          <SliderRow slider={slider} />
        ))}
      </div>
      <Others entry={entry} />
    </>
  )
}

function quickText(isMoved: boolean): string {
  if (!isMoved) return 'Move one to see at once about what it would do.'
  if (quick.value === null)
    return quickRefusal.value === null ? 'Planning the day once; then each change is quick.' : ''
  return `Approximate: ${whatIfText(quick.value)}`
}

function SliderRow({ slider }: { slider: Slider }) {
  const { field, label, least, most, step, still } = slider
  const value = moved.value[field] ?? still
  return (
    <Field label={`${label}: ${sliderText(slider, value)}`}>
      {(named) => (
        <input
          {...named}
          type="range"
          min={least}
          max={most}
          step={step}
          value={value}
          data-field={field}
          aria-valuetext={sliderText(slider, value)}
          onInput={(event) => (moved.value = movedTo(moved.value, slider, Number(event.currentTarget.value)))}
        />
      )}
    </Field>
  )
}

/** Another car or sky, or one held speed, in full at once. */
function Others({ entry }: { entry: PlanAnswer }) {
  const kmh = useSignal('')
  const speedKmh = typedSpeed(kmh.value)
  const others = (kind: 'cars' | 'skies', own: string) =>
    (lists.value?.[kind] ?? []).filter(({ id }) => id !== own).map(({ id, name }) => [id, name] as const)
  return (
    <div class="others">
      {(['cars', 'skies'] as const).map((kind) => {
        const items = others(kind, kind === 'cars' ? entry.carId : entry.skyId)
        if (items.length === 0) return null
        return (
          <SelectField
            label={kind === 'cars' ? 'Another car' : 'Another sky'}
            value=""
            options={[['', 'choose to work it out'], ...items]}
            onChange={(id) => id !== '' && void workOutOther(entry, kind, id)}
          />
        )
      })}
      <div class="held">
        <TextField
          label="One held speed, km/h"
          inputMode="numeric"
          value={kmh.value}
          onChange={(text) => (kmh.value = text)}
        />
        <button
          type="button"
          class="btn line"
          disabled={speedKmh === null}
          onClick={() => {
            if (speedKmh === null) return
            void workOut(entry.id, { name: `Held at ${speedKmh} km/h`, speeds: { kind: 'constant', speedKmh } })
            kmh.value = ''
          }}
        >
          Work it out
        </button>
      </div>
    </div>
  )
}
