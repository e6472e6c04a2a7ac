import { type BeliefStore, beliefStore } from './belief-store.ts'
import { type ChoiceStore, choiceStore } from './choice-store.ts'
import { type DocumentStore, documentStore } from './document-store.ts'
import { type EventStore, eventStore } from './event-store.ts'
import { type ForecastStore, forecastStore } from './forecast-store.ts'
import type { Sql } from './guarded-sql.ts'
import { type LinkStore, linkStore } from './link-store.ts'
import { type MoveStore, moveStore } from './move-store.ts'
import { type PlanStore, planStore } from './plan-store.ts'
import { type ReadingStore, readingStore } from './reading-store.ts'
import { type SessionStore, sessionStore } from './session-store.ts'
import { type VariantStore, variantStore } from './variant-store.ts'

export interface Store {
  documents: DocumentStore
  forecasts: ForecastStore
  plans: PlanStore
  racePlans: PlanStore
  variants: VariantStore
  choices: ChoiceStore
  readings: ReadingStore
  beliefs: BeliefStore
  moves: MoveStore
  links: LinkStore
  sessions: SessionStore
  events: EventStore
  /** True until the first document was ever saved; a removed one counts. */
  isEmpty(): Promise<boolean>
  /** Resolves when the database answers; rejects with its error. */
  ping(): Promise<void>
}

/** All that the service keeps, on a migrated database. */
export const store = (sql: Sql): Store => ({
  documents: documentStore(sql),
  forecasts: forecastStore(sql),
  plans: planStore(sql, 'day'),
  racePlans: planStore(sql, 'race'),
  variants: variantStore(sql),
  choices: choiceStore(sql),
  readings: readingStore(sql),
  beliefs: beliefStore(sql),
  moves: moveStore(sql),
  links: linkStore(sql),
  sessions: sessionStore(sql),
  events: eventStore(sql),
  async isEmpty() {
    const rows = await sql<{ isEmpty: boolean }[]>`select not exists (select from documents) as "isEmpty"`
    return rows[0].isEmpty
  },
  async ping() {
    await sql`select 1`
  },
})
