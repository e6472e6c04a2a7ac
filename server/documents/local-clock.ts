import { offsetMin } from './local-time.ts'

/** Zones change their offset at full quarters of an hour. [ms] */
const SLOT_MS = 900_000

/** Local hours and dates of many instants; each quarter of an hour is looked up once. */
export function localClock(zone: string): { hourOf: (atMs: number) => number; dateOf: (atMs: number) => string } {
  const offsets = new Map<number, number>()
  const local = (atMs: number): Date => {
    const slot = Math.floor(atMs / SLOT_MS)
    const known = offsets.get(slot) ?? offsetMin(slot * SLOT_MS, zone)
    offsets.set(slot, known)
    return new Date(atMs + known * 60_000)
  }
  return {
    hourOf: (atMs) => local(atMs).getUTCHours(),
    dateOf: (atMs) => local(atMs).toISOString().slice(0, 10),
  }
}
