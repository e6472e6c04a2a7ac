import type { Sql } from './guarded-sql.ts'
import { type Link, linkColumns } from './link-store.ts'
import { checkField, isSha256, isUuid, utc } from './storable.ts'

export interface Session {
  link: Link
  /** ISO 8601 in UTC. */
  expiresAt: string
}

/** A browser's sessions, by the SHA-256 of their token in hexadecimal digits. */
export interface SessionStore {
  /** False when the link is none, or revoked. */
  create(linkId: string, sha256: string, expiresAt: Date): Promise<boolean>
  /** The session and its link; null when there is none, or it has expired, or its link was revoked. */
  find(sha256: string): Promise<Session | null>
  /** Signs out; false when there was none. */
  remove(sha256: string): Promise<boolean>
  /** Forgets sessions that have expired; how many. */
  prune(): Promise<number>
}

/**
 * Sessions of those who came in by a link.
 *
 * @throws StoreError field-not-storable from `create`
 */
export function sessionStore(sql: Sql): SessionStore {
  return {
    async create(linkId, sha256, expiresAt) {
      checkField('sha256', '(not shown)', isSha256(sha256), '64 lower-case hexadecimal digits')
      checkField('expiresAt', expiresAt, !Number.isNaN(expiresAt.getTime()), 'an instant')
      if (!isUuid(linkId)) return false
      const rows = await sql`
        insert into sessions (token_sha256, link_id, expires_at)
        select ${sha256}, id, ${expiresAt} from access_links where id = ${linkId} and revoked_at is null
        returning link_id`
      return rows.length > 0
    },

    async find(sha256) {
      if (!isSha256(sha256)) return null
      const rows = await sql<(Link & { expiresAt: string })[]>`
        select ${linkColumns(sql)}, ${utc(sql, 's.expires_at')} as "expiresAt"
        from sessions s join access_links l on l.id = s.link_id
        where s.token_sha256 = ${sha256} and s.expires_at > clock_timestamp() and l.revoked_at is null`
      if (rows.length === 0) return null
      const { expiresAt, ...link } = rows[0]
      return { link, expiresAt }
    },

    async remove(sha256) {
      if (!isSha256(sha256)) return false
      const rows = await sql`delete from sessions where token_sha256 = ${sha256} returning link_id`
      return rows.length > 0
    },

    async prune() {
      const rows = await sql`delete from sessions where expires_at <= clock_timestamp() returning link_id`
      return rows.length
    },
  }
}
