import type { PlanEntry } from './plan-types.ts'

/** A stored document, as far as its age goes. */
interface Item {
  id: string
  /** instant (ISO 8601, UTC) */
  savedAt: string
}

/** The documents and the day that plans are looked for. */
export interface PlanDay {
  date: string
  carId: string
  skyId: string
}

/** Whether a plan is of a day's whole hours and road, with these documents. */
const isOf = (day: PlanDay, { date, carId, skyId, wanted }: PlanEntry): boolean =>
  date === day.date &&
  carId === day.carId &&
  skyId === day.skyId &&
  wanted.objective !== 'furthest' &&
  (['byTime', 'from', 'until'] as const).every((part) => wanted[part] === undefined)

/** The newest plan of each want, by the charge wanted at the close, least first. */
export function variants(entries: PlanEntry[], day: PlanDay): PlanEntry[] {
  const newest = new Map<string, PlanEntry>()
  for (const entry of entries) {
    if (!isOf(day, entry) || entry.state !== 'done' || entry.gist === null) continue
    const key = `${Math.round(10 * entry.gist.targetPct)} ${entry.wanted.promisePct}`
    if (!newest.has(key)) newest.set(key, entry)
  }
  return [...newest.values()].sort(
    (a, b) => (a.gist?.targetPct ?? 0) - (b.gist?.targetPct ?? 0) || a.wanted.promisePct - b.wanted.promisePct,
  )
}

/** The plan to show first: the newest with the same wants, else the newest of the day. */
export function planToShow(entries: PlanEntry[], day: PlanDay, want: PlanEntry['wanted']): PlanEntry | null {
  const done = entries.filter((entry) => isOf(day, entry) && entry.state === 'done')
  const same = done.find(({ wanted }) => wanted.targetPct === want.targetPct && wanted.promisePct === want.promisePct)
  return same ?? done[0] ?? null
}

/** A plan of the day that is being worked on. */
export const planAtWork = (entries: PlanEntry[], day: PlanDay): PlanEntry | null =>
  entries.find((entry) => isOf(day, entry) && entry.state === 'working') ?? null

/** Documents behind a plan that were saved after it was ordered. */
export function savedSince(
  { raceId, carId, skyId, startedAt }: Pick<PlanEntry, 'raceId' | 'carId' | 'skyId' | 'startedAt'>,
  lists: Record<'races' | 'cars' | 'skies', Item[]>,
): string[] {
  const behind: [string, Item | undefined][] = [
    ['the race', lists.races.find(({ id }) => id === raceId)],
    ['the car', lists.cars.find(({ id }) => id === carId)],
    ['the sky', lists.skies.find(({ id }) => id === skyId)],
  ]
  return behind.filter(([, item]) => item !== undefined && item.savedAt > startedAt).map(([name]) => name)
}
