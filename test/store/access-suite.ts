import { createHash, randomBytes, randomUUID } from 'node:crypto'
import { afterAll, beforeAll, beforeEach, expect, it } from 'vitest'
import { type LinkStore, linkStore } from '../../server/store/link-store.ts'
import { type SessionStore, sessionStore } from '../../server/store/session-store.ts'
import { migrated, type TestDatabase } from './engines.ts'

const DAY = { raceId: 'plateau-run', date: '2026-10-10' }
const inAnHour = (): Date => new Date(Date.now() + 3_600_000)
const hashOf = (token: string): string => createHash('sha256').update(token).digest('hex')
const newHash = (): string => hashOf(randomBytes(32).toString('base64url'))

/** What links and sessions promise, on any engine. */
export function accessSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let links: LinkStore
  let sessions: SessionStore

  beforeAll(async () => {
    database = await migrated(open())
    links = linkStore(database.sql)
    sessions = sessionStore(database.sql)
  })
  afterAll(() => database.discard())
  beforeEach(async () => {
    await database.sql`truncate access_links, sessions`
  })
  const share = (more: Partial<Parameters<LinkStore['createShare']>[0]> = {}) =>
    links.createShare({ ...DAY, name: 'Chase car', sha256: newHash(), by: null, ...more })

  const sessionCount = async (): Promise<number> => (await database.sql`select from sessions`).length

  it('the first start makes one owner’s link, the next none, even when twenty start at once', async () => {
    expect(await links.hasOwner()).toBe(false)
    const hashes = Array.from({ length: 20 }, newHash)
    const made = await Promise.all(hashes.map((hash) => links.createOwner(hash)))
    const winners = hashes.filter((_, at) => made[at] !== null)
    expect(winners).toHaveLength(1)
    expect(await links.hasOwner()).toBe(true)
    expect(await links.createOwner(newHash())).toBeNull()
    expect(await links.findByToken(winners[0])).toMatchObject({
      kind: 'owner',
      role: 'planner',
      raceId: null,
      date: null,
      isRevoked: false,
    })
    for (const hash of hashes) if (hash !== winners[0]) expect(await links.findByToken(hash)).toBeNull()
  })

  it('a new owner’s link ends the lost one and its sessions, and leaves share links alone', async () => {
    const lost = await links.createOwner(hashOf('lost'))
    const shared = await share({ sha256: hashOf('shared') })
    await sessions.create(lost?.id ?? '', hashOf('browser'), inAnHour())
    await sessions.create(shared.id, hashOf('phone'), inAnHour())
    const { link, revoked } = await links.replaceOwner(hashOf('fresh'))
    expect(revoked).toEqual([lost?.id])
    expect(await links.findByToken(hashOf('lost'))).toMatchObject({ isRevoked: true })
    expect(await links.findByToken(hashOf('fresh'))).toEqual(link)
    expect(link).toMatchObject({ kind: 'owner', isRevoked: false })
    expect(await sessions.find(hashOf('browser'))).toBeNull()
    expect(await sessions.find(hashOf('phone'))).toMatchObject({ link: { id: shared.id } })
    expect(await sessionCount()).toBe(1)
  })

  it('of ten new owner’s links made at once one holds at the end', async () => {
    const hashes = Array.from({ length: 10 }, newHash)
    await Promise.all(hashes.map((hash) => links.replaceOwner(hash)))
    const found = await Promise.all(hashes.map((hash) => links.findByToken(hash)))
    expect(found.filter((link) => link?.isRevoked === false)).toHaveLength(1)
    expect(found.filter((link) => link?.isRevoked === true)).toHaveLength(9)
    const [{ held }] = await database.sql`
      select count(*)::int as held from access_links where kind = 'owner' and revoked_at is null`
    expect(held).toBe(1)
  })

  it('no token is kept, only its SHA-256', async () => {
    const token = randomBytes(32).toString('base64url')
    const link = await share({ sha256: hashOf(token) })
    await sessions.create(link.id, hashOf(`session ${token}`), inAnHour())
    const rows = [...(await database.sql`select * from access_links`), ...(await database.sql`select * from sessions`)]
    const text = JSON.stringify(rows)
    expect(text).toContain(hashOf(token))
    expect(text).not.toContain(token)
    for (const sha256 of [token, '', hashOf(token).toUpperCase(), `${hashOf(token)}0`]) {
      await expect(share({ sha256 })).rejects.toMatchObject({ field: 'sha256' })
      await expect(share({ sha256 })).rejects.not.toThrow(token)
      await expect(links.createOwner(sha256)).rejects.toMatchObject({ field: 'sha256' })
      await expect(links.replaceOwner(sha256)).rejects.toMatchObject({ field: 'sha256' })
      await expect(sessions.create(link.id, sha256, inAnHour())).rejects.toMatchObject({ field: 'sha256' })
    }
  })

  it('a share link opens its own day, and the day lists its links newest first', async () => {
    const by = randomUUID()
    const first = await share({ name: 'Chase car', by })
    const second = await share({ name: 'Scout ☀' })
    await share({ date: '2026-10-11' })
    await share({ raceId: 'other-race' })
    await links.createOwner(newHash())
    expect(first).toMatchObject({ ...DAY, kind: 'share', role: 'viewer', name: 'Chase car', isRevoked: false })
    expect(first.createdAt).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/)
    expect(await links.list(DAY.raceId, DAY.date)).toEqual([second, first])
    expect(await links.get(first.id)).toEqual(first)
    const [row] = await database.sql`select created_by from access_links where id = ${first.id}`
    expect(row.created_by).toBe(by)
  })

  it('a revoked link is listed as such and its sessions are over; it cannot be revoked twice', async () => {
    const link = await share({ sha256: hashOf('gone') })
    const other = await share()
    await sessions.create(link.id, hashOf('phone'), inAnHour())
    await sessions.create(other.id, hashOf('other phone'), inAnHour())
    expect(await links.revoke(link.id)).toBe(true)
    expect(await links.revoke(link.id)).toBe(false)
    expect(await links.findByToken(hashOf('gone'))).toMatchObject({ id: link.id, isRevoked: true })
    expect((await links.list(DAY.raceId, DAY.date)).map(({ isRevoked }) => isRevoked)).toEqual([false, true])
    expect(await sessions.find(hashOf('phone'))).toBeNull()
    expect(await sessions.create(link.id, newHash(), inAnHour())).toBe(false)
    expect(await sessions.find(hashOf('other phone'))).not.toBeNull()
    expect(await sessionCount()).toBe(1)
  })

  it('a session that was made while its link was revoked does not hold', async () => {
    const link = await share()
    await sessions.create(link.id, hashOf('phone'), inAnHour())
    await database.sql`update access_links set revoked_at = clock_timestamp() where id = ${link.id}`
    expect(await sessionCount()).toBe(1)
    expect(await sessions.find(hashOf('phone'))).toBeNull()
  })

  it('the owner’s link is not revoked like a share link', async () => {
    const owner = await links.createOwner(newHash())
    expect(await links.revoke(owner?.id ?? '')).toBe(false)
    expect(await links.hasOwner()).toBe(true)
  })

  it('a session holds until its time, and is forgotten after it', async () => {
    const link = await share()
    const expiresAt = inAnHour()
    expect(await sessions.create(link.id, hashOf('now'), expiresAt)).toBe(true)
    expect(await sessions.create(link.id, hashOf('late'), new Date(Date.now() - 60_000))).toBe(true)
    expect(await sessions.find(hashOf('now'))).toEqual({ link, expiresAt: expiresAt.toISOString() })
    expect(await sessions.find(hashOf('late'))).toBeNull()
    expect(await sessions.prune()).toBe(1)
    expect(await sessions.prune()).toBe(0)
    expect(await sessions.remove(hashOf('now'))).toBe(true)
    expect(await sessions.remove(hashOf('now'))).toBe(false)
    expect(await sessions.find(hashOf('now'))).toBeNull()
  })

  it('what is no id, hash or day finds nothing', async () => {
    await share()
    for (const id of ['', 'x', randomUUID(), "' or true --", 'nul\0']) {
      expect(await links.get(id)).toBeNull()
      expect(await links.revoke(id)).toBe(false)
      expect(await links.findByToken(id)).toBeNull()
      expect(await links.list(id, DAY.date)).toEqual([])
      expect(await links.list(DAY.raceId, id)).toEqual([])
      expect(await sessions.find(id)).toBeNull()
      expect(await sessions.remove(id)).toBe(false)
      expect(await sessions.create(id, newHash(), inAnHour())).toBe(false)
    }
  })

  it('a share of no day, or with a name that cannot be kept, is refused by the name of its field', async () => {
    await expect(share({ date: '2026-02-30' })).rejects.toMatchObject({ field: 'date' })
    await expect(share({ raceId: 'Plateau Run' })).rejects.toMatchObject({ field: 'raceId' })
    await expect(share({ name: 'nul\0' })).rejects.toMatchObject({ field: 'name' })
    await expect(share({ by: 'me' })).rejects.toMatchObject({ field: 'by' })
  })
}
