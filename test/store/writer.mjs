// A process that writes rows one after another to the embedded database until it is killed, for kill.test.ts.
// It says every row that was there at the start, then each row as soon as its commit is acknowledged.
import { openDatabase } from '../../dist/server/store/database.js'

const workerUrl = new URL('../../dist/server/store/embedded-worker.js', import.meta.url)
const { sql } = await openDatabase({ dataDir: process.argv[2], workerUrl })
await sql`create table if not exists rows_written (n integer primary key, filler text not null)`
const found = await sql`select n from rows_written order by n`
process.send({ found: found.map(({ n }) => n) })
for (let n = (found.at(-1)?.n ?? 0) + 1; ; n++) {
  await sql`insert into rows_written (n, filler) values (${n}, ${'x'.repeat(500)})`
  process.send({ written: n })
}
