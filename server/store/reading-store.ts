import type { Fragment, Sql } from './guarded-sql.ts'
import { firstDifference } from './difference.ts'
import { checkBy, checkField, isSlug, isUuid, isVersion, json, saving, utc } from './storable.ts'

/** A reading as it was received, with what holds of it now. `receivedAt` is ISO 8601 in UTC. */
export interface StoredReading {
  id: string
  reading: unknown
  carId: string
  carVersion: number
  judgement: unknown
  receivedAt: string
  isSetAside: boolean
}

export interface NewReading {
  raceId: string
  /** The document; its id was made by the client. */
  reading: { readonly id: string }
  carId: string
  carVersion: number
  judgement: unknown
  by: string | null
}

/** Stored; or there already with the same document; or with another one, and the first field that differs. */
export type Added = { stored: true } | { repeat: true } | { conflict: string }

/** Nothing is ever changed or removed: marks and judgements are added, and the last one holds. */
export interface ReadingStore {
  add(reading: NewReading): Promise<Added>
  /** In order of receipt. */
  list(raceId: string): Promise<StoredReading[]>
  get(raceId: string, id: string): Promise<StoredReading | null>
  /** Sets a reading aside or takes it back; false when there is none. */
  mark(raceId: string, id: string, isSetAside: boolean, by: string | null): Promise<boolean>
  /** Says something new of a reading; false when there is none. */
  judge(raceId: string, id: string, judgement: unknown): Promise<boolean>
}

const checkJudgement = (judgement: unknown): void =>
  checkField('judgement', judgement, typeof judgement === 'object' && judgement !== null, 'an object')

/**
 * Readings of trackers.
 *
 * @throws StoreError field-not-storable from `add`, `mark` and `judge`
 */
export function readingStore(sql: Sql): ReadingStore {
  const select = (where: Fragment): Fragment => sql`
    select r.id, r.body as reading, r.car_id as "carId", r.car_version as "carVersion", j.judgement,
      ${utc(sql, 'r.received_at')} as "receivedAt", coalesce(m.is_set_aside, false) as "isSetAside"
    from readings r
    left join lateral (
      select is_set_aside from reading_marks
      where race_id = r.race_id and reading_id = r.id order by save_number desc limit 1
    ) m on true
    left join lateral (
      select judgement from reading_judgements
      where race_id = r.race_id and reading_id = r.id order by save_number desc limit 1
    ) j on true
    where ${where}
    order by r.save_number`

  const get: ReadingStore['get'] = async (raceId, id) => {
    if (!isSlug(raceId) || !isUuid(id)) return null
    const rows = await sql<StoredReading[]>`${select(sql`r.race_id = ${raceId} and r.id = ${id}`)}`
    return rows[0] ?? null
  }

  return {
    async add({ raceId, reading, carId, carVersion, judgement, by }) {
      checkField('raceId', raceId, isSlug(raceId), '1 to 64 lower-case letters, digits or hyphens')
      checkField('id', reading.id, isUuid(reading.id), 'a UUID')
      checkBy(by)
      checkJudgement(judgement)
      checkField('carVersion', carVersion, isVersion(carVersion), 'a whole number from 1 to 2147483647')
      const rows = await saving(
        { carId, reading, judgement },
        () => sql`
        with fresh as (
          insert into readings (race_id, id, car_id, car_version, body, created_by)
          values (${raceId}, ${reading.id}, ${carId}, ${carVersion}, ${json(sql, 'reading', reading)}, ${by})
          on conflict (race_id, id) do nothing
          returning race_id, id
        )
        insert into reading_judgements (race_id, reading_id, judgement)
        select race_id, id, ${json(sql, 'judgement', judgement)} from fresh
        returning reading_id`,
      )
      if (rows.length > 0) return { stored: true }
      const before = await get(raceId, reading.id)
      const conflict = firstDifference(before?.reading, reading)
      return conflict === null ? { repeat: true } : { conflict }
    },

    async list(raceId) {
      if (!isSlug(raceId)) return []
      const rows = await sql<StoredReading[]>`${select(sql`r.race_id = ${raceId}`)}`
      return rows
    },

    get,

    async mark(raceId, id, isSetAside, by) {
      checkBy(by)
      if (!isSlug(raceId) || !isUuid(id)) return false
      const rows = await sql`
        insert into reading_marks (race_id, reading_id, is_set_aside, created_by)
        select race_id, id, ${isSetAside}, ${by} from readings where race_id = ${raceId} and id = ${id}
        returning reading_id`
      return rows.length > 0
    },

    async judge(raceId, id, judgement) {
      checkJudgement(judgement)
      if (!isSlug(raceId) || !isUuid(id)) return false
      const rows = await saving(
        { judgement },
        () => sql`
        insert into reading_judgements (race_id, reading_id, judgement)
        select race_id, id, ${json(sql, 'judgement', judgement)} from readings where race_id = ${raceId} and id = ${id}
        returning reading_id`,
      )
      return rows.length > 0
    },
  }
}
