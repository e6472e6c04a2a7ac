import type { Fragment, Sql, TransactionSql } from './guarded-sql.ts'
import { checkBy, checkField, isDay, isSha256, isSlug, isUuid, saving, utc } from './storable.ts'

/** A link that lets its holder in; its token is known to the holder alone. Instants are ISO 8601 in UTC. */
export interface Link {
  id: string
  kind: 'owner' | 'share'
  /** What the holder may do: 'planner' for the owner, 'viewer' for a share link. */
  role: string
  /** The one day that a share link opens; null for the owner's. */
  raceId: string | null
  date: string | null
  name: string
  createdAt: string
  isRevoked: boolean
}

export interface NewShare {
  raceId: string
  date: string
  name: string
  /** SHA-256 of the token, in hexadecimal digits. */
  sha256: string
  by: string | null
}

/** Tokens are made by the caller, 256 random bits each, and come in here only as their SHA-256 in hexadecimal. */
export interface LinkStore {
  /** True when an owner's link holds. */
  hasOwner(): Promise<boolean>
  /** The first owner's link; null when one holds already. */
  createOwner(sha256: string): Promise<Link | null>
  /** A new owner's link in place of the one that holds; that one's sessions end. Gives the ids that were revoked. */
  replaceOwner(sha256: string): Promise<{ link: Link; revoked: string[] }>
  createShare(share: NewShare): Promise<Link>
  /** The day's share links, revoked ones too, newest first. */
  list(raceId: string, date: string): Promise<Link[]>
  get(id: string): Promise<Link | null>
  /** Revokes a share link and ends its sessions; false when there is none such that holds. */
  revoke(id: string): Promise<boolean>
  /** The link of a token, revoked or not. */
  findByToken(sha256: string): Promise<Link | null>
}

/** A link's columns, for a table named `l`. */
export const linkColumns = (sql: Sql): Fragment => sql`
  l.id, l.kind, l.role, l.race_id as "raceId", l.date, l.name,
  ${utc(sql, 'l.created_at')} as "createdAt", l.revoked_at is not null as "isRevoked"`

const checkHash = (sha256: string): void =>
  checkField('sha256', '(not shown)', isSha256(sha256), '64 lower-case hexadecimal digits')

/**
 * Links to come in by.
 *
 * @throws StoreError field-not-storable from the methods that save
 */
export function linkStore(sql: Sql): LinkStore {
  const newOwner = (client: Sql | TransactionSql, sha256: string): Promise<Link[]> => client<Link[]>`
    insert into access_links as l (kind, role, token_sha256, name)
    values ('owner', 'planner', ${sha256}, 'Owner')
    on conflict (kind) where kind = 'owner' and revoked_at is null do nothing
    returning ${linkColumns(sql)}`

  const replaceOwner: LinkStore['replaceOwner'] = async (sha256) => {
    checkHash(sha256)
    const replaced = await sql.begin(async (tx) => {
      const old = await tx<{ id: string }[]>`
        update access_links set revoked_at = clock_timestamp()
        where kind = 'owner' and revoked_at is null returning id`
      const revoked = old.map(({ id }) => id)
      await tx`delete from sessions where link_id = any(${revoked}::uuid[])`
      const [link] = await newOwner(tx, sha256)
      return { link, revoked }
    })
    // Another one took the place in between: replace that.
    return replaced.link === undefined ? replaceOwner(sha256) : replaced
  }

  return {
    async hasOwner() {
      const [{ has }] = await sql<{ has: boolean }[]>`
        select exists (select from access_links where kind = 'owner' and revoked_at is null) as has`
      return has
    },

    async createOwner(sha256) {
      checkHash(sha256)
      const rows = await newOwner(sql, sha256)
      return rows[0] ?? null
    },

    replaceOwner,

    async createShare({ raceId, date, name, sha256, by }) {
      checkHash(sha256)
      checkField('raceId', raceId, isSlug(raceId), '1 to 64 lower-case letters, digits or hyphens')
      checkField('date', date, isDay(date), 'a day as YYYY-MM-DD')
      checkBy(by)
      const rows = await saving(
        { name },
        () => sql<Link[]>`
        insert into access_links as l (kind, role, token_sha256, race_id, date, name, created_by)
        values ('share', 'viewer', ${sha256}, ${raceId}, ${date}, ${name}, ${by})
        returning ${linkColumns(sql)}`,
      )
      return rows[0]
    },

    async list(raceId, date) {
      if (!isSlug(raceId) || !isDay(date)) return []
      const rows = await sql<Link[]>`
        select ${linkColumns(sql)} from access_links l
        where kind = 'share' and race_id = ${raceId} and date = ${date} order by save_number desc`
      return rows
    },

    async get(id) {
      if (!isUuid(id)) return null
      const rows = await sql<Link[]>`select ${linkColumns(sql)} from access_links l where id = ${id}`
      return rows[0] ?? null
    },

    async revoke(id) {
      if (!isUuid(id)) return false
      const rows = await sql`
        with ended as (
          update access_links set revoked_at = clock_timestamp()
          where id = ${id} and kind = 'share' and revoked_at is null returning id
        ), gone as (
          delete from sessions where link_id in (select id from ended)
        )
        select id from ended`
      return rows.length > 0
    },

    async findByToken(sha256) {
      if (!isSha256(sha256)) return null
      const rows = await sql<Link[]>`select ${linkColumns(sql)} from access_links l where token_sha256 = ${sha256}`
      return rows[0] ?? null
    },
  }
}
