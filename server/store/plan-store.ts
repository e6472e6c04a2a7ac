import type { Fragment, Sql } from './guarded-sql.ts'
import { JsonText } from './json-text.ts'
import { isUuid, json, saving, utc } from './storable.ts'

/** What plans are of: one day, or the days of a race together. */
export type PlanKind = 'day' | 'race'

/** What a plan is made from. The id follows from all of it, so that the same question is one plan. */
export interface NewPlan {
  id: string
  raceId: string
  /** Its day, the first one of a race. YYYY-MM-DD */
  date: string
  carId: string
  skyId: string
  /** Target, spreads and the like, as they were asked for. */
  wanted: unknown
  inputsHash: string
  engineVersion: string
}

export type PlanState = 'working' | 'done' | 'failed' | 'cancelled'

/** A plan without its body; instants are ISO 8601 in UTC. */
export interface PlanEntry extends NewPlan {
  state: PlanState
  startedAt: string
  endedAt: string | null
  /** Why it failed: a code and a sentence. */
  fault: { code: string; detail: string } | null
  /** The plan in short; null until it is done. */
  gist: unknown
}

export interface StoredPlan extends PlanEntry {
  plan: JsonText | null
}

export interface PlanStore {
  /** Marks a plan as being worked on. @returns false where it is done, or another works on it */
  begin(plan: NewPlan): Promise<boolean>
  /** Keeps the result as JSON, unless the plan was cancelled meanwhile. @returns whether it was kept */
  finish(id: string, planText: string, gist: unknown): Promise<boolean>
  fail(id: string, fault: { code: string; detail: string }): Promise<void>
  /** @returns whether it was being worked on */
  cancel(id: string): Promise<boolean>
  get(id: string): Promise<StoredPlan | null>
  /** The same without its body. */
  entry(id: string): Promise<PlanEntry | null>
  /** The race's last 50, newest first. */
  list(raceId: string): Promise<PlanEntry[]>
}

/** Nobody works on a plan that began so long ago: whoever did is gone. */
const GONE_AFTER: Record<PlanKind, string> = { day: '5 minutes', race: '30 minutes' }

/** Plans of one kind as they were worked out, never changed once done. */
export function planStore(sql: Sql, kind: PlanKind): PlanStore {
  const entry = (): Fragment => sql`
    id, race_id as "raceId", to_char(date, 'YYYY-MM-DD') as date, car_id as "carId", sky_id as "skyId", wanted,
    inputs_hash as "inputsHash", engine_version as "engineVersion", state, fault, gist,
    ${utc(sql, 'started_at')} as "startedAt", ${utc(sql, 'ended_at')} as "endedAt"`

  return {
    async begin(plan) {
      const rows = await saving(
        { ...plan },
        () => sql<{ id: string }[]>`
        insert into plans (id, kind, race_id, date, car_id, sky_id, wanted, inputs_hash, engine_version, state)
        values (
          ${plan.id}, ${kind}, ${plan.raceId}, ${plan.date}, ${plan.carId}, ${plan.skyId},
          ${json(sql, 'wanted', plan.wanted)}, ${plan.inputsHash}, ${plan.engineVersion}, 'working'
        )
        on conflict (id) do update set state = 'working', started_at = clock_timestamp(), ended_at = null, fault = null
        where plans.state in ('failed', 'cancelled')
          or (plans.state = 'working' and plans.started_at < clock_timestamp() - ${GONE_AFTER[kind]}::interval)
        returning id`,
      )
      return rows.length > 0
    },

    async finish(id, planText, gist) {
      const rows = await sql<{ id: string }[]>`
        update plans set state = 'done', ended_at = clock_timestamp(), plan = ${planText}::text::jsonb,
          gist = ${json(sql, 'gist', gist)}
        where id = ${id} and kind = ${kind} and state = 'working' returning id`
      return rows.length > 0
    },

    async fail(id, fault) {
      await sql`
        update plans set state = 'failed', ended_at = clock_timestamp(), fault = ${json(sql, 'fault', fault)}
        where id = ${id} and kind = ${kind} and state = 'working'`
    },

    async cancel(id) {
      if (!isUuid(id)) return false
      const rows = await sql<{ id: string }[]>`
        update plans set state = 'cancelled', ended_at = clock_timestamp()
        where id = ${id} and kind = ${kind} and state = 'working' returning id`
      return rows.length > 0
    },

    async get(id) {
      if (!isUuid(id)) return null
      const rows = await sql<(PlanEntry & { text: string | null })[]>`
        select ${entry()}, plan::text as text from plans where id = ${id} and kind = ${kind}`
      if (rows.length === 0) return null
      const { text, ...found } = rows[0]
      return { ...found, plan: text === null ? null : new JsonText(text) }
    },

    async entry(id) {
      if (!isUuid(id)) return null
      const rows = await sql<PlanEntry[]>`select ${entry()} from plans where id = ${id} and kind = ${kind}`
      return rows[0] ?? null
    },

    async list(raceId) {
      const rows = await sql<PlanEntry[]>`
        select ${entry()} from plans where race_id = ${raceId} and kind = ${kind}
        order by save_number desc limit 50`
      return rows
    },
  }
}
