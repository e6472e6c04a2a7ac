import { signal } from '@preact/signals'
import type { PointingDay } from '../server/documents/pointing.ts'
import type { Refusal } from './api.ts'
import { pointingOf, type RaceDay } from './crew.ts'

/** Where to point the array on a day, by the budget that the crew follows. */
export interface Pointing extends RaceDay {
  madeAt: string
  day: PointingDay
}

export const pointing = signal<Pointing | null>(null)
export const pointingRefusal = signal<Refusal | null>(null)

/** Reads the day's table; what was shown before stays until it is there. */
export async function loadPointing({ race, date }: RaceDay): Promise<void> {
  const { value, refusal } = await pointingOf({ race, date })
  const day = value?.pointing.days.find((entry) => entry.date === date)
  if (value !== undefined && day !== undefined) pointing.value = { race, date, madeAt: value.madeAt, day }
  pointingRefusal.value = refusal ?? null
}

/** The table as far as it is known for this very day. */
export function pointingOn({ race, date }: RaceDay): Pointing | null {
  const { value } = pointing
  return value?.race === race && value.date === date ? value : null
}
