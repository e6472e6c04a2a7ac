import { afterAll, beforeAll, beforeEach, expect, it } from 'vitest'
import { type DocumentStore, documentStore } from '../../server/store/document-store.ts'
import { store } from '../../server/store/store.ts'
import { migrated, type TestDatabase } from './engines.ts'

/** What documents promise, on any engine. */
export function documentSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let documents: DocumentStore

  beforeAll(async () => {
    database = await migrated(open())
    documents = documentStore(database.sql)
  })
  afterAll(() => database.discard())
  beforeEach(async () => {
    await database.sql`truncate documents, document_versions`
  })

  it('a store is empty until its first document, and not again when that is removed', async () => {
    const whole = store(database.sql)
    await whole.ping()
    expect(await whole.isEmpty()).toBe(true)
    await documents.create('car', 'weaver-2', 'Weaver 2', {})
    expect(await whole.isEmpty()).toBe(false)
    await documents.remove('car', 'weaver-2', 1)
    expect(await whole.isEmpty()).toBe(false)
  })

  it('a created document comes back as it was given, with version 1 and its time', async () => {
    const body = { mass: 1.5e2, tiny: 1e-300, deep: [{ list: [1, null, 'é ☀ \\u0000 "'] }], none: null, empty: {} }
    const before = Date.now()
    const saved = await documents.create('car', 'weaver-2', 'Weaver 2', body)
    expect(saved).toMatchObject({ version: 1 })
    const found = await documents.get('car', 'weaver-2')
    expect(found).toEqual({ id: 'weaver-2', name: 'Weaver 2', version: 1, savedAt: found?.savedAt, body })
    expect(found?.savedAt).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/)
    expect(Math.abs(Date.parse(found?.savedAt ?? '') - before)).toBeLessThan(60_000)
    expect(saved).toEqual({ version: 1, savedAt: found?.savedAt })
    const text = await documents.text('car', 'weaver-2')
    expect({ ...text, body: text?.body.toJSON() }).toEqual(found)
    await documents.remove('car', 'weaver-2', 1)
    expect(await documents.text('car', 'weaver-2')).toBeNull()
    expect((await documents.text('car', 'weaver-2', 1))?.body).toEqual(text?.body)
  })

  it('kinds do not meet: a car and a route may have the same id', async () => {
    await documents.create('car', 'plateau', 'A car', { wheels: 4 })
    await documents.create('route', 'plateau', 'A route', { km: 568 })
    expect((await documents.get('car', 'plateau'))?.body).toEqual({ wheels: 4 })
    expect((await documents.get('route', 'plateau'))?.body).toEqual({ km: 568 })
    expect(await documents.get('sky', 'plateau')).toBeNull()
  })

  it('a second document of the same id is refused with the version that holds', async () => {
    await documents.create('car', 'weaver-2', 'Weaver 2', {})
    await documents.replace('car', 'weaver-2', 1, 'Weaver 2', {})
    expect(await documents.create('car', 'weaver-2', 'Another', {})).toEqual({ conflict: 2 })
    expect((await documents.get('car', 'weaver-2'))?.name).toBe('Weaver 2')
  })

  it('a replacement counts up and leaves the earlier versions to be read', async () => {
    await documents.create('sky', 'saturday', 'Noon issue', { cloud: 1 })
    expect(await documents.replace('sky', 'saturday', 1, 'Evening issue', { cloud: 2 })).toMatchObject({ version: 2 })
    expect(await documents.get('sky', 'saturday')).toMatchObject({
      version: 2,
      name: 'Evening issue',
      body: { cloud: 2 },
    })
    expect(await documents.get('sky', 'saturday', 1)).toMatchObject({
      version: 1,
      name: 'Noon issue',
      body: { cloud: 1 },
    })
    const versions = await documents.versions('sky', 'saturday')
    expect(versions.map(({ version, name }) => [version, name])).toEqual([
      [2, 'Evening issue'],
      [1, 'Noon issue'],
    ])
  })

  it('an edit from an old version is refused with the version that holds, and changes nothing', async () => {
    await documents.create('car', 'weaver-2', 'First', { n: 1 })
    await documents.replace('car', 'weaver-2', 1, 'Second', { n: 2 })
    expect(await documents.replace('car', 'weaver-2', 1, 'Late', { n: 3 })).toEqual({ conflict: 2 })
    expect(await documents.remove('car', 'weaver-2', 1)).toEqual({ conflict: 2 })
    expect(await documents.get('car', 'weaver-2')).toMatchObject({ version: 2, body: { n: 2 } })
    expect(await documents.versions('car', 'weaver-2')).toHaveLength(2)
  })

  it('what is not there is missing, whatever its id or version looks like', async () => {
    await documents.create('car', 'weaver-2', 'Weaver 2', {})
    for (const id of ['none', '', 'UPPER', 'a b', 'x'.repeat(65), "'; drop table documents; --", 'nul\0']) {
      expect(await documents.get('car', id)).toBeNull()
      expect(await documents.versions('car', id)).toEqual([])
      expect(await documents.replace('car', id, 1, 'x', {})).toBe('missing')
      expect(await documents.remove('car', id, 1)).toBe('missing')
    }
    for (const version of [0, -1, 1.5, Number.NaN, 2 ** 31, 2 ** 53, Infinity]) {
      expect(await documents.get('car', 'weaver-2', version)).toBeNull()
      expect(await documents.replace('car', 'weaver-2', version, 'x', {})).toEqual({ conflict: 1 })
      expect(await documents.remove('car', 'weaver-2', version)).toEqual({ conflict: 1 })
    }
  })

  it('a removed document leaves the list, keeps its versions, and counts on when its id is used again', async () => {
    await documents.create('race', 'plateau-run', 'Plateau Run', { days: 3 })
    await documents.replace('race', 'plateau-run', 1, 'Plateau Run', { days: 4 })
    expect(await documents.remove('race', 'plateau-run', 2)).toBe('removed')
    expect(await documents.list('race')).toEqual([])
    expect(await documents.get('race', 'plateau-run')).toBeNull()
    expect(await documents.get('race', 'plateau-run', 2)).toMatchObject({ body: { days: 4 } })
    expect(await documents.remove('race', 'plateau-run', 2)).toBe('missing')
    expect(await documents.replace('race', 'plateau-run', 2, 'x', {})).toBe('missing')
    expect(await documents.create('race', 'plateau-run', 'Again', { days: 5 })).toMatchObject({ version: 3 })
    expect(await documents.versions('race', 'plateau-run')).toHaveLength(3)
  })

  it('the list shows the newest save first and carries no bodies', async () => {
    for (const id of ['one', 'two', 'three']) await documents.create('car', id, id.toUpperCase(), { id })
    await documents.replace('car', 'one', 1, 'ONE', {})
    const list = await documents.list('car')
    expect(list.map(({ id, version }) => [id, version])).toEqual([
      ['one', 2],
      ['three', 1],
      ['two', 1],
    ])
    expect(Object.keys(list[0]).sort()).toEqual(['id', 'name', 'savedAt', 'version'])
  })

  it('of thirty edits from the same version exactly one wins', async () => {
    await documents.create('car', 'weaver-2', 'Weaver 2', { n: 0 })
    for (let version = 1; version <= 5; version++) {
      const edits = Array.from({ length: 30 }, (_, n) => documents.replace('car', 'weaver-2', version, 'Edit', { n }))
      const outcomes = await Promise.all(edits)
      const won = outcomes.flatMap((outcome, n) => (typeof outcome === 'object' && 'version' in outcome ? [n] : []))
      expect(won).toHaveLength(1)
      expect(outcomes.filter((outcome) => typeof outcome === 'object' && 'conflict' in outcome)).toHaveLength(29)
      expect((await documents.get('car', 'weaver-2'))?.body).toEqual({ n: won[0] })
    }
    expect(await documents.versions('car', 'weaver-2')).toHaveLength(6)
  })

  it('of twenty creations of one id exactly one wins', async () => {
    const outcomes = await Promise.all(
      Array.from({ length: 20 }, (_, n) => documents.create('route', 'saltpan-loop', `Loop ${n}`, { n })),
    )
    expect(outcomes.filter((outcome) => 'version' in outcome)).toHaveLength(1)
    expect(outcomes.filter((outcome) => 'conflict' in outcome && outcome.conflict === 1)).toHaveLength(19)
  })

  it('removals and creations at once never lose a version number or use one twice', async () => {
    await documents.create('car', 'weaver-2', 'Weaver 2', {})
    for (let round = 0; round < 10; round++) {
      const version = (await documents.versions('car', 'weaver-2'))[0].version
      await Promise.all([
        documents.remove('car', 'weaver-2', version),
        documents.create('car', 'weaver-2', 'Weaver 2', {}),
        documents.replace('car', 'weaver-2', version, 'Weaver 2', {}),
      ])
      await documents.create('car', 'weaver-2', 'Weaver 2', {})
    }
    const versions = (await documents.versions('car', 'weaver-2')).map(({ version }) => version)
    expect(versions).toEqual(versions.map((_, at) => versions.length - at))
  })

  it('a document of two megabytes comes back whole', async () => {
    const points = Array.from({ length: 50_000 }, (_, n) => [-30 + n / 1e5, 140.123456 + n / 1e5, 100 + (n % 900) / 10])
    const body = { points, note: 'x'.repeat(600_000) }
    expect(JSON.stringify(body).length).toBeGreaterThan(2_000_000)
    await documents.create('route', 'long', 'Long', body)
    expect((await documents.get('route', 'long'))?.body).toEqual(body)
  })

  it('text that cannot be stored is refused by the name of its field, and nothing is saved', async () => {
    const refused = (body: unknown, name = 'x'): Promise<unknown> =>
      documents.create('car', 'bad', name, body).catch((error: unknown) => error)
    const cases: [error: unknown, field: string][] = [
      [await refused({ panels: [{}, { note: 'nul\0' }] }), 'body.panels[1].note'],
      [await refused({ note: 'half a pair \ud83d' }), 'body.note'],
      [await refused({ note: '\ude00 the other half' }), 'body.note'],
      [await refused({ 'key\0': 1 }), 'body: the name of a field'],
      [await refused({}, 'nul\0'), 'name'],
      [await refused(undefined), 'body'],
      [await documents.create('car', 'Not a slug', 'x', {}).catch((error: unknown) => error), 'id'],
    ]
    for (const [error, field] of cases) {
      expect(error).toMatchObject({ name: 'StoreError', code: 'field-not-storable', field })
      expect(error).toMatchObject({ message: expect.stringMatching(/expected|not a value/) })
    }
    expect(await documents.list('car')).toEqual([])
    expect(await documents.create('car', 'good', 'x', { note: 'pair 😀, written \\u0000' })).toMatchObject({
      version: 1,
    })
  })
}
