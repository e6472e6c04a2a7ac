import type { Sql } from './guarded-sql.ts'
import type { PlanState } from './plan-store.ts'
import { isUuid, json, saving, utc } from './storable.ts'

/** A variant of a plan. The id follows from plan, variant and engine, so that the same order is one variant. */
export interface NewVariant {
  id: string
  planId: string
  name: string
  /** What it changes. */
  variant: unknown
  /** Of the plan's inputs and the variant together. */
  inputsHash: string
  engineVersion: string
}

/** A variant with its outcome; instants are ISO 8601 in UTC. */
export interface StoredVariant extends NewVariant {
  state: PlanState
  startedAt: string
  endedAt: string | null
  /** Why it failed: a code and a sentence. */
  fault: { code: string; detail: string } | null
  answer: unknown
}

export interface VariantStore {
  /** Marks a variant as being worked on. @returns false where it is done, or another works on it */
  begin(variant: NewVariant): Promise<boolean>
  /** Keeps the answer, unless the variant was cancelled meanwhile. @returns whether it was kept */
  finish(id: string, answer: unknown): Promise<boolean>
  fail(id: string, fault: { code: string; detail: string }): Promise<void>
  /** @returns whether it was being worked on */
  cancel(id: string): Promise<boolean>
  get(id: string): Promise<StoredVariant | null>
  /** The plan's last 50, newest first. */
  list(planId: string): Promise<StoredVariant[]>
}

/** Variants as they were worked out, never changed once done. */
export function variantStore(sql: Sql): VariantStore {
  const read = () => sql`
    select id, plan_id as "planId", name, variant, inputs_hash as "inputsHash", engine_version as "engineVersion",
      state, fault, answer, ${utc(sql, 'started_at')} as "startedAt", ${utc(sql, 'ended_at')} as "endedAt"
    from plan_variants`

  return {
    async begin(variant) {
      const rows = await saving(
        { ...variant },
        () => sql<{ id: string }[]>`
        insert into plan_variants (id, plan_id, name, variant, inputs_hash, engine_version, state)
        values (
          ${variant.id}, ${variant.planId}, ${variant.name}, ${json(sql, 'variant', variant.variant)},
          ${variant.inputsHash}, ${variant.engineVersion}, 'working'
        )
        on conflict (id) do update set state = 'working', started_at = clock_timestamp(), ended_at = null, fault = null
        where plan_variants.state in ('failed', 'cancelled')
          or (plan_variants.state = 'working' and plan_variants.started_at < clock_timestamp() - interval '15 minutes')
        returning id`,
      )
      return rows.length > 0
    },

    async finish(id, answer) {
      const rows = await sql<{ id: string }[]>`
        update plan_variants set state = 'done', ended_at = clock_timestamp(), answer = ${json(sql, 'answer', answer)}
        where id = ${id} and state = 'working' returning id`
      return rows.length > 0
    },

    async fail(id, fault) {
      await sql`
        update plan_variants set state = 'failed', ended_at = clock_timestamp(), fault = ${json(sql, 'fault', fault)}
        where id = ${id} and state = 'working'`
    },

    async cancel(id) {
      if (!isUuid(id)) return false
      const rows = await sql<{ id: string }[]>`
        update plan_variants set state = 'cancelled', ended_at = clock_timestamp()
        where id = ${id} and state = 'working' returning id`
      return rows.length > 0
    },

    async get(id) {
      if (!isUuid(id)) return null
      const rows = await sql<StoredVariant[]>`${read()} where id = ${id}`
      return rows[0] ?? null
    },

    async list(planId) {
      if (!isUuid(planId)) return []
      const rows = await sql<StoredVariant[]>`${read()} where plan_id = ${planId} order by save_number desc limit 50`
      return rows
    },
  }
}
