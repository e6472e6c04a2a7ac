import { describe, expect, it } from 'vitest'
import { planAtWork, planToShow, savedSince, variants } from '../../web/plan-pick.ts'
import type { PlanEntry } from '../../web/plan-types.ts'

const DAY = { date: '2026-10-17', carId: 'weaver-2', skyId: 'friday' }
const entry = (id: string, targetPct: number, change: Partial<PlanEntry> = {}): PlanEntry => ({
  ...DAY,
  id,
  raceId: 'plateau',
  wanted: { targetPct, promisePct: 5 },
  engineVersion: '1.1.0',
  state: 'done',
  fault: null,
  startedAt: '2026-10-16T19:00:00.000Z',
  endedAt: '2026-10-16T19:00:10.000Z',
  gist: {
    outcome: 'planned',
    targetPct,
    arriveAt: '2026-10-17T16:05:00+02:00',
    closingWh: 1850,
    closingPct: 40,
    touchesReservePct: 4,
  },
  ...change,
})
const ids = (entries: PlanEntry[]): string[] => entries.map(({ id }) => id)

describe('plans of a day', () => {
  it('stand side by side once for each want, newest first, by what is left at the close', () => {
    const kept = [
      entry('new-40', 40),
      entry('low', 20),
      entry('old-40', 40),
      entry('sure', 40, { wanted: { targetPct: 40, promisePct: 1 } }),
      entry('by-noon', 35, { wanted: { targetPct: 35, promisePct: 5, byTime: '12:00' } }),
      entry('from-here', 45, { wanted: { targetPct: 45, promisePct: 5, from: { km: 120 } } }),
      entry('furthest', 50, { wanted: { targetPct: 50, promisePct: 5, objective: 'furthest' } }),
      entry('other-day', 30, { date: '2026-10-18' }),
      entry('other-car', 30, { carId: 'weaver-1' }),
      entry('failed', 30, { state: 'failed', gist: null }),
    ]
    expect(ids(variants(kept, DAY))).toEqual(['low', 'sure', 'new-40'])
  })

  it('show the newest with the same wants first, else the newest of the day, else none', () => {
    const kept = [entry('low', 20), entry('new-40', 40), entry('old-40', 40)]
    expect(planToShow(kept, DAY, { targetPct: 40, promisePct: 5 })?.id).toBe('new-40')
    expect(planToShow(kept, DAY, { promisePct: 5 })?.id).toBe('low')
    expect(planToShow(kept, { ...DAY, skyId: 'other' }, { promisePct: 5 })).toBeNull()
  })

  it('tell which one is being worked on', () => {
    const kept = [entry('done', 20), entry('works', 40, { state: 'working', gist: null })]
    expect(planAtWork(kept, DAY)?.id).toBe('works')
    expect(planAtWork(kept, { ...DAY, date: '2026-10-18' })).toBeNull()
  })

  it('are old where race, car or sky was saved after the order', () => {
    const item = (id: string, savedAt: string) => ({ id, name: id, version: 2, savedAt })
    const lists = {
      races: [item('plateau', '2026-10-16T18:00:00.000Z')],
      cars: [item('weaver-2', '2026-10-16T19:00:00.001Z')],
      skies: [item('friday', '2026-10-16T19:30:00.000Z'), item('other', '2026-10-16T23:00:00.000Z')],
    }
    expect(savedSince(entry('one', 40), lists)).toEqual(['the car', 'the sky'])
    expect(savedSince(entry('one', 40), { races: [], cars: [], skies: [] })).toEqual([])
  })
})
