import type { Sql } from './guarded-sql.ts'
import { checkBy, checkField, isDay, isSlug, isUuid, json, saving, utc } from './storable.ts'

export type MoveCause = 'reading' | 'set-aside' | 'take-back' | 'use-bench' | 'use-learned' | 'choice' | 'engine'

/** What moved a day's closing balance, and by how much. */
export interface NewMove {
  raceId: string
  date: string
  cause: MoveCause
  readingId: string | null
  /** Points of efficiency by the tracker's name. */
  pointsPct: Record<string, number>
  /** Null where there was no budget before, or it has no closing balance. */
  closingWhBefore: number | null
  closingWhAfter: number | null
  forecastId: string
  by: string | null
}

/** `movedAt` is ISO 8601 in UTC. */
export interface Move extends Omit<NewMove, 'by'> {
  movedAt: string
}

export interface MoveStore {
  add(move: NewMove): Promise<void>
  /** Newest first, of one day or of all. */
  list(raceId: string, date?: string): Promise<Move[]>
}

/**
 * The history of what moved the budget.
 *
 * @throws StoreError field-not-storable from `add`
 */
export const moveStore = (sql: Sql): MoveStore => ({
  async add(move) {
    const { raceId, date, readingId, forecastId, closingWhBefore, closingWhAfter } = move
    checkField('raceId', raceId, isSlug(raceId), '1 to 64 lower-case letters, digits or hyphens')
    checkField('date', date, isDay(date), 'a day as YYYY-MM-DD')
    checkField('readingId', readingId, readingId === null || isUuid(readingId), 'a UUID or null')
    checkBy(move.by)
    checkField('forecastId', forecastId, isUuid(forecastId), 'a UUID')
    for (const [field, wh] of Object.entries({ closingWhBefore, closingWhAfter })) {
      checkField(field, wh, wh === null || Number.isFinite(wh), 'a number or null')
    }
    const pointsPct = json(sql, 'pointsPct', move.pointsPct)
    await saving(
      { pointsPct: move.pointsPct },
      () => sql`
      insert into budget_moves (
        race_id, date, cause, reading_id, points_pct, closing_wh_before, closing_wh_after, forecast_id, created_by
      ) values (
        ${raceId}, ${date}, ${move.cause}, ${readingId}, ${pointsPct}, ${closingWhBefore}, ${closingWhAfter},
        ${forecastId}, ${move.by}
      )`,
    )
  },

  async list(raceId, date) {
    if (!isSlug(raceId) || (date !== undefined && !isDay(date))) return []
    const rows = await sql<Move[]>`
      select race_id as "raceId", date, cause, reading_id as "readingId", points_pct as "pointsPct",
        closing_wh_before as "closingWhBefore", closing_wh_after as "closingWhAfter", forecast_id as "forecastId",
        ${utc(sql, 'created_at')} as "movedAt"
      from budget_moves
      where race_id = ${raceId} ${date === undefined ? sql`` : sql`and date = ${date}`}
      order by save_number desc`
    return rows
  },
})
