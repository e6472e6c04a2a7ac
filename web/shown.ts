import { signal } from '@preact/signals'

/** The clock of the page, ticking by the second. */
export const nowMs = signal(Date.now())

/** The stage whose account is shown; null for the whole day. */
export const stageId = signal<string | null>(null)

export const tick = (): void => void setInterval(() => (nowMs.value = Date.now()), 1000)
