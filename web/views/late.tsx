import { type Signal, signal } from '@preact/signals'
import type { ComponentType } from 'preact'
import { Ruling } from './ruling.tsx'

/** A screen that is fetched when it is first shown; ruling stands for it until then. */
export function late(load: () => Promise<ComponentType>): ComponentType {
  const screen: Signal<{ View: ComponentType } | null> = signal(null)
  const hasFailed = signal(false)
  let isAsked = false
  const ask = (): void => {
    isAsked = true
    hasFailed.value = false
    load().then(
      (View) => (screen.value = { View }),
      () => {
        isAsked = false
        hasFailed.value = true
      },
    )
  }
  return function Late() {
    if (!isAsked && !hasFailed.value) ask()
    if (screen.value !== null) return <screen.value.View />
    return (
      <div class="pad gap">
        {hasFailed.value ? (
          <>
            <p role="alert">This screen was not fetched: no contact.</p>
            <button type="button" class="btn gap" onClick={ask}>
              Try again
            </button>
          </>
        ) : (
          <Ruling />
        )}
      </div>
    )
  }
}
