import type { Service } from '../api/service.ts'
import type { Attempt } from './attempt.ts'

/** Every version and every head of every document, and every forecast, one a line, with what it holds. */
export async function storeState({ database }: Service, touched: Attempt['touches'] = null): Promise<string[]> {
  const { sql } = database
  const id = touched?.id ?? null
  const rows = await sql<{ line: string }[]>`
    select kind || '/' || id || case when removed_at is null then ' holds ' else ' left at ' end || version as line
      from documents where ${id}::text is null or id = ${id}
    union all
    select kind || '/' || id || ' version ' || version || ' ' || md5(name || body::text || saved_at)
      from document_versions where ${id}::text is null or id = ${id}
    union all
    select 'forecast/' || race_id || ' ' || id || ' ' || md5(budget::text)
      from forecasts where ${id}::text is null or race_id = ${id}
    order by line`
  return rows.map(({ line }) => line)
}
