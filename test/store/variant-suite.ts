import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { planStore } from '../../server/store/plan-store.ts'
import { type NewVariant, type VariantStore, variantStore } from '../../server/store/variant-store.ts'
import { migrated, type TestDatabase } from './engines.ts'

/** What kept variants promise, on any engine. */
export function variantSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let variants: VariantStore
  const planId = randomUUID()

  beforeAll(async () => {
    database = await migrated(open())
    variants = variantStore(database.sql)
    const plan = { id: planId, raceId: 'tour', date: '2026-10-17', carId: 'weaver-2', skyId: 'saturday' }
    await planStore(database.sql, 'day').begin({ ...plan, wanted: {}, inputsHash: 'a'.repeat(64), engineVersion: '1' })
  })
  afterAll(() => database.discard())

  const some = (more: Partial<NewVariant> = {}): NewVariant => ({
    id: randomUUID(),
    planId,
    name: 'Less sun',
    variant: { name: 'Less sun', change: { sunPct: 90 } },
    inputsHash: 'b'.repeat(64),
    engineVersion: '1',
    ...more,
  })

  it('a variant is begun by one of thirty orders, and kept as it was worked out', async () => {
    const one = some()
    const begun = await Promise.all(Array.from({ length: 30 }, () => variants.begin(one)))
    expect(begun.filter((mine) => mine)).toHaveLength(1)
    expect(await variants.get(one.id)).toMatchObject({ ...one, state: 'working', answer: null, endedAt: null })
    expect(await variants.finish(one.id, { laterMin: 3.25 })).toBe(true)
    expect(await variants.finish(one.id, { laterMin: 4 })).toBe(false)
    expect(await variants.get(one.id)).toMatchObject({ state: 'done', answer: { laterMin: 3.25 }, fault: null })
    expect(await variants.begin(one)).toBe(false)
    expect(await variants.cancel(one.id)).toBe(false)
  })

  it('one that was taken back or has failed may be begun again, and keeps no answer that comes too late', async () => {
    const one = some()
    await variants.begin(one)
    expect(await variants.cancel(one.id)).toBe(true)
    expect(await variants.finish(one.id, {})).toBe(false)
    expect(await variants.begin(one)).toBe(true)
    await variants.fail(one.id, { code: 'busy', detail: 'Later.' })
    expect(await variants.get(one.id)).toMatchObject({ state: 'failed', fault: { code: 'busy', detail: 'Later.' } })
    expect(await variants.begin(one)).toBe(true)
    expect(await variants.get(one.id)).toMatchObject({ state: 'working', fault: null, endedAt: null })
  })

  it('one whose process is gone may be begun again after a quarter of an hour', async () => {
    const one = some()
    await variants.begin(one)
    const age = (min: number) => database.sql`
      update plan_variants set started_at = clock_timestamp() - make_interval(mins => ${min}) where id = ${one.id}`
    await age(14)
    expect(await variants.begin(one)).toBe(false)
    await age(16)
    expect(await variants.begin(one)).toBe(true)
  })

  it('a plan lists its own, newest first', async () => {
    const other = randomUUID()
    const plan = { id: other, raceId: 'tour', date: '2026-10-18', carId: 'weaver-2', skyId: 'saturday' }
    await planStore(database.sql, 'day').begin({ ...plan, wanted: {}, inputsHash: 'a'.repeat(64), engineVersion: '1' })
    const all = [some({ planId: other, name: 'A' }), some({ planId: other, name: 'B' })]
    for (const one of all) await variants.begin(one)
    expect((await variants.list(other)).map(({ name }) => name)).toEqual(['B', 'A'])
    expect(await variants.list('no-plan')).toEqual([])
    expect(await variants.get('no-variant')).toBeNull()
  })

  it('what cannot be kept is refused by the name of its field', async () => {
    const refused = (more: Partial<NewVariant>) => variants.begin(some(more)).catch((error: unknown) => error)
    expect(await refused({ planId: randomUUID() })).toMatchObject({ field: 'planId' })
    expect(await refused({ variant: { name: 'a\0' } })).toMatchObject({ field: 'variant.name' })
  })
}
