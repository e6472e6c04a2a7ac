// A process that writes to the embedded database until no file may grow any more, as on a full disk, for
// open-errors.test.ts (run under `ulimit -f`). It says what happened.
import { openDatabase } from '../../dist/server/store/database.js'
import { storeFault } from '../../dist/server/store/store-error.js'

const workerUrl = new URL('../../dist/server/store/embedded-worker.js', import.meta.url)
const database = await openDatabase({ dataDir: process.argv[2], workerUrl })
const { sql } = database
await sql`create table rows_written (n integer primary key, filler text)`
await sql`alter table rows_written alter filler set storage plain`
let written = 0
let refusal = null
while (refusal === null && written < 100_000) {
  const rows = Array.from({ length: 200 }, (_, n) => ({ n: written + n, filler: 'x'.repeat(1000) }))
  try {
    await sql`insert into rows_written ${sql(rows)}`
    written += rows.length
  } catch (error) {
    refusal = { code: error.code ?? null, message: error.message, fault: storeFault(error)?.code ?? null }
  }
}
const startMs = performance.now()
const [{ count }] = await sql`select count(*)::int as count from rows_written`
await sql`delete from rows_written where n < 10`
console.log(JSON.stringify({ written, refusal, count, answeredMs: performance.now() - startMs }))
await database.close()
