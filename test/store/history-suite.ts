import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { type BeliefStore, beliefStore } from '../../server/store/belief-store.ts'
import { type MoveStore, moveStore, type NewMove } from '../../server/store/move-store.ts'
import { readingStore } from '../../server/store/reading-store.ts'
import { migrated, type TestDatabase } from './engines.ts'
import { someForecast } from './some-forecast.ts'

/** What the history of moves and the curve in use promise, on any engine. */
export function historySuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let moves: MoveStore
  let beliefs: BeliefStore
  let forecastId: string
  let readingId: string

  beforeAll(async () => {
    database = await migrated(open())
    moves = moveStore(database.sql)
    beliefs = beliefStore(database.sql)
    forecastId = await someForecast(database.sql)
    readingId = randomUUID()
    const reading = { raceId: 'plateau-run', reading: { id: readingId }, carId: 'weaver-2', carVersion: 1 }
    await readingStore(database.sql).add({ ...reading, judgement: {}, by: null })
  })
  afterAll(() => database.discard())
  const move = (more: Partial<NewMove> = {}): NewMove => ({
    raceId: 'plateau-run',
    date: '2026-10-10',
    cause: 'reading',
    readingId,
    pointsPct: { 'Left wing': -0.42, 'Right wing': 0 },
    closingWhBefore: 2481.25,
    closingWhAfter: 2440.5,
    forecastId,
    by: null,
    ...more,
  })

  it('the learned curve is used until someone goes back to the bench curve, and again after', async () => {
    expect(await beliefs.uses('plateau-run')).toEqual({ which: 'learned', widen: 1, chosenAt: null })
    await beliefs.use('plateau-run', 'bench', 1, randomUUID())
    const bench = await beliefs.uses('plateau-run')
    expect(bench).toMatchObject({ which: 'bench', widen: 1 })
    expect(bench.chosenAt).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/)
    await beliefs.use('plateau-run', 'learned', 2.5, null)
    expect(await beliefs.uses('plateau-run')).toMatchObject({ which: 'learned', widen: 2.5 })
    expect(await beliefs.uses('other-race')).toMatchObject({ which: 'learned', widen: 1 })
    expect(await beliefs.uses('no slug \0')).toMatchObject({ which: 'learned' })
    expect(await database.sql`select which from belief_uses order by save_number`).toHaveLength(2)
  })

  it('a spread narrower than the bench states, or none at all, is refused', async () => {
    for (const widen of [0.99, 0, -1, Number.NaN, Number.POSITIVE_INFINITY]) {
      await expect(beliefs.use('narrow', 'learned', widen, null)).rejects.toMatchObject({ field: 'widen' })
    }
    await expect(beliefs.use('No Slug', 'learned', 1, null)).rejects.toMatchObject({ field: 'raceId' })
    expect(await beliefs.uses('narrow')).toMatchObject({ chosenAt: null })
  })

  it('the history shows what moved which day by how much, newest first', async () => {
    const choice = { cause: 'choice', readingId: null, closingWhBefore: null, pointsPct: {} } as const
    await moves.add(move(choice))
    await moves.add(move())
    await moves.add(move({ date: '2026-10-11', closingWhAfter: null }))
    const all = await moves.list('plateau-run')
    const { by, ...shown } = move()
    expect(by).toBeNull()
    expect(all[1]).toEqual({ ...shown, movedAt: all[1].movedAt })
    expect(
      all.map(({ date, cause, closingWhBefore, closingWhAfter }) => [date, cause, closingWhBefore, closingWhAfter]),
    ).toEqual([
      ['2026-10-11', 'reading', 2481.25, null],
      ['2026-10-10', 'reading', 2481.25, 2440.5],
      ['2026-10-10', 'choice', null, 2440.5],
    ])
    expect((await moves.list('plateau-run', '2026-10-10')).map(({ cause }) => cause)).toEqual(['reading', 'choice'])
    expect(await moves.list('other-race')).toEqual([])
    expect(await moves.list('plateau-run', 'x')).toEqual([])
  })

  it('what cannot be kept is refused by the name of its field', async () => {
    const refused = (more: Partial<NewMove>): Promise<unknown> => moves.add(move(more)).catch((error: unknown) => error)
    expect(await refused({ date: 'today' })).toMatchObject({ field: 'date' })
    expect(await refused({ raceId: '' })).toMatchObject({ field: 'raceId' })
    expect(await refused({ readingId: 'x' })).toMatchObject({ field: 'readingId' })
    expect(await refused({ readingId: randomUUID() })).toMatchObject({ field: 'readingId' })
    expect(await refused({ forecastId: 'x' })).toMatchObject({ field: 'forecastId' })
    expect(await refused({ closingWhAfter: Number.NaN })).toMatchObject({ field: 'closingWhAfter' })
    expect(await refused({ pointsPct: { 'a\0': 1 } })).toMatchObject({ field: 'pointsPct: the name of a field' })
  })
}
