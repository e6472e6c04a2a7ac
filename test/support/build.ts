import { execFileSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'

/** Builds what changed before the tests, so that workers and child processes run the code as shipped. */
export default function build(): void {
  if (process.env.STAGEWATT_NO_BUILD === '1') return
  const start = fileURLToPath(new URL('../../server/start.mjs', import.meta.url))
  execFileSync(process.execPath, [start, '--build-only'], { stdio: ['ignore', 'inherit', 'inherit'] })
}
