import type { Sql } from './guarded-sql.ts'
import { checkBy, checkField, isSlug, utc } from './storable.ts'

/** Which curve a race's forecasts use. */
export interface BeliefUse {
  which: 'learned' | 'bench'
  /** Factor on the bench curve's stated spread; 1 as stated. */
  widen: number
  /** When it was chosen, ISO 8601 in UTC; null when it never was. */
  chosenAt: string | null
}

export interface BeliefStore {
  /** What holds; the learned curve with its spread as stated until someone chooses otherwise. */
  uses(raceId: string): Promise<BeliefUse>
  use(raceId: string, which: BeliefUse['which'], widen: number, by: string | null): Promise<void>
}

/**
 * Which curve is believed, race by race; earlier choices stay on record.
 *
 * @throws StoreError field-not-storable from `use`
 */
export const beliefStore = (sql: Sql): BeliefStore => ({
  async uses(raceId) {
    const rows = await sql<BeliefUse[]>`
      select which, widen, ${utc(sql, 'created_at')} as "chosenAt" from belief_uses
      where race_id = ${isSlug(raceId) ? raceId : ''} order by save_number desc limit 1`
    return rows[0] ?? { which: 'learned', widen: 1, chosenAt: null }
  },

  async use(raceId, which, widen, by) {
    checkField('raceId', raceId, isSlug(raceId), '1 to 64 lower-case letters, digits or hyphens')
    checkBy(by)
    checkField('widen', widen, Number.isFinite(widen) && widen >= 1, 'a number of 1 or more')
    await sql`
      insert into belief_uses (race_id, which, widen, created_by) values (${raceId}, ${which}, ${widen}, ${by})`
  },
})
