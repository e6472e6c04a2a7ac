import type { Fragment, Sql } from './guarded-sql.ts'
import { checkField, json, saving, utc } from './storable.ts'

/** Something that open streams are told. `at` is ISO 8601 in UTC. */
export interface StoredEvent {
  /** Counts 1, 2, 3 … within its topic, in the order in which events can be seen. */
  id: string
  kind: string
  data: unknown
  at: string
}

export interface EventStore {
  /** Adds an event and, on a server, notifies every process of it; its id. */
  append(topic: string, kind: string, data: unknown): Promise<string>
  /** Id of the topic's last event, also when that was pruned; '0' before the first. */
  last(topic: string): Promise<string>
  /** Events after the one with id `lastId`, oldest first, at most `limit`. */
  since(topic: string, lastId: string, limit: number): Promise<StoredEvent[]>
  /** Forgets events from before an instant; how many. */
  prune(olderThan: Date): Promise<number>
}

/** Name of the channel on which processes that share a schema notify each other. */
export const channel = (sql: Sql): Fragment => sql`'stagewatt_' || hashtext(current_schema())`

const isTopic = (topic: string): boolean => /^[\w$/-]{1,100}$/.test(topic)
const isEventId = (id: string): boolean => /^\d{1,15}$/.test(id)

/**
 * Events by topic, kept for streams that come back after a pause.
 *
 * @throws StoreError field-not-storable from `append`
 */
export const eventStore = (sql: Sql): EventStore => ({
  async append(topic, kind, data) {
    checkField('topic', topic, isTopic(topic), '1 to 100 letters, digits, hyphens or slashes')
    const rows = await saving(
      { kind, data },
      () => sql<{ id: string }[]>`
      with head as (
        insert into event_topics as t (topic, last_id) values (${topic}, 1)
        on conflict (topic) do update set last_id = t.last_id + 1
        returning topic, last_id
      ), event as (
        insert into events (topic, id, kind, data)
        select topic, last_id, ${kind}, ${json(sql, 'data', data)} from head
        returning topic, id
      )
      select id::text, pg_notify(${channel(sql)}, topic) from event`,
    )
    return rows[0].id
  },

  async last(topic) {
    if (!isTopic(topic)) return '0'
    const rows = await sql<{ id: string }[]>`select last_id::text as id from event_topics where topic = ${topic}`
    return rows[0]?.id ?? '0'
  },

  async since(topic, lastId, limit) {
    if (!isTopic(topic) || !isEventId(lastId)) return []
    const rows = await sql<StoredEvent[]>`
      select id::text, kind, data, ${utc(sql, 'created_at')} as at from events
      where topic = ${topic} and events.id > ${lastId}::bigint order by events.id limit ${limit}`
    return rows
  },

  async prune(olderThan) {
    const rows = await sql`delete from events where created_at < ${olderThan} returning 1`
    return rows.length
  },
})
