import { useEffect } from 'preact/hooks'
import type { DayItem } from '../api.ts'
import {
  askChange,
  changed,
  changeRefusal,
  form,
  type HereDay,
  isChanging,
  moved,
  wantedText,
} from '../phone/here-state.ts'
import { movedTo, SLIDERS, type Slider, sliderText, whatIfText } from '../phone/what-if-form.ts'
import { Conflict } from './conflict.tsx'
import { Field } from './field.tsx'
import { WorkedOut } from './worked-out.tsx'

/** What less sun, more wind or a longer stop would do to the rest of the day: at once, and approximate. */
export function WhatIf({ day, item }: { day: HereDay; item: DayItem }) {
  const isMoved = Object.keys(moved.value).length > 0
  const { of } = form.value
  useEffect(() => {
    if (isMoved) void askChange(day, item)
  }, [moved.value, of, wantedText.value])
  return (
    <section class="sec pad what-if" aria-labelledby="what-if-title">
      <div class="sech">
        <h2 id="what-if-title">What if</h2>
        {isMoved && (
          <button type="button" class="quiet" onClick={() => (moved.value = {})}>
            As planned
          </button>
        )}
      </div>
      <p
        role="status"
        id="what-if-say"
        aria-busy={isChanging.value}
        class={isChanging.value ? 'change waits' : 'change'}
      >
        {sentence(isMoved)}
      </p>
      {isMoved && changeRefusal.value !== null && <Conflict refusal={changeRefusal.value} />}
      <div class="sliders">
        {SLIDERS.map((slider) => (
          <Row slider={slider} />
        ))}
      </div>
      {isMoved && changed.value !== null && <WorkedOut of={changed.value} zone={item.zone} />}
      <p class="note">Approximate, from the best plan of the rest of the day: plan in full before you rely on it.</p>
    </section>
  )
}

function sentence(isMoved: boolean): string {
  if (!isMoved) return 'Move one to see what it would do.'
  if (changed.value === null)
    return changeRefusal.value === null ? 'Planning the day once; then each change is quick.' : ''
  return whatIfText(changed.value.value)
}

function Row({ slider }: { slider: Slider }) {
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
