import { type DocumentStore, documentStore } from './document-store.ts'
import { type ForecastStore, forecastStore } from './forecast-store.ts'
import type { Sql } from './guarded-sql.ts'

export interface Store {
  documents: DocumentStore
  forecasts: ForecastStore
  /** True until the first document was ever saved; a removed one counts. */
  isEmpty(): Promise<boolean>
  /** Resolves when the database answers; rejects with its error. */
  ping(): Promise<void>
}

/** All that the service keeps, on a migrated database. */
export const store = (sql: Sql): Store => ({
  documents: documentStore(sql),
  forecasts: forecastStore(sql),
  async isEmpty() {
    const rows = await sql<{ isEmpty: boolean }[]>`select not exists (select from documents) as "isEmpty"`
    return rows[0].isEmpty
  },
  async ping() {
    await sql`select 1`
  },
})
