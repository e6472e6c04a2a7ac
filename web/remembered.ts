import type { Meters } from './log-reading.ts'

/** What this device keeps between readings: the tracker and which meter reads what. */
export interface Habit {
  tracker: string
  meters: Meters
}

const key = (car: string): string => `stagewatt-log-${car}`

export function habitOf(car: string): Habit {
  try {
    const kept: Partial<Habit> | null = JSON.parse(localStorage.getItem(key(car)) ?? 'null')
    return { tracker: kept?.tracker ?? '', meters: kept?.meters ?? {} }
  } catch {
    return { tracker: '', meters: {} }
  }
}

export function keepHabit(car: string, habit: Habit): void {
  try {
    localStorage.setItem(key(car), JSON.stringify(habit))
  } catch {
    // A browser that keeps nothing asks for the meters again next time.
  }
}
