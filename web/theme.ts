import { effect, signal } from '@preact/signals'

/** Noon is light, for the sun; Lamp is dark, for the van at night; else as the phone is set. */
export type Theme = 'phone' | 'noon' | 'lamp'

const KEY = 'stagewatt-theme'

export const theme = signal<Theme>(kept())

function kept(): Theme {
  try {
    const value = localStorage.getItem(KEY)
    return value === 'noon' || value === 'lamp' ? value : 'phone'
  } catch {
    return 'phone'
  }
}

/** Keeps the page in the chosen theme from now on. */
export function wearTheme(): void {
  effect(() => {
    const { dataset } = document.documentElement
    if (theme.value === 'phone') delete dataset.theme
    else dataset.theme = theme.value === 'lamp' ? 'dark' : 'light'
    try {
      localStorage.setItem(KEY, theme.value)
    } catch {
      // A browser that keeps nothing still shows the theme until the page is closed.
    }
  })
}
