import type { HereForm } from './here-form.ts'

const key = (race: string, date: string): string => `stagewatt-here-${race}-${date}`

/** Where the car was by whoever typed it last on this phone; null where nobody did. */
export function lastHere(race: string, date: string): HereForm | null {
  try {
    const kept: HereForm | null = JSON.parse(localStorage.getItem(key(race, date)) ?? 'null')
    return kept
  } catch {
    return null
  }
}

export function rememberHere(race: string, date: string, form: HereForm): void {
  try {
    localStorage.setItem(key(race, date), JSON.stringify(form))
  } catch {
    // A browser that keeps nothing asks again next time.
  }
}
