import { afterAll } from 'vitest'

/** Under REQUIRE_ALL=1 a skipped test is a failure: what CI did not run, it must not pass. */
afterAll((suite) => {
  if (process.env.REQUIRE_ALL !== '1') return
  const skipped: string[] = []
  const walk = (task: { type: string; mode: string; name: string; tasks?: unknown[] }): void => {
    if (task.mode === 'skip' || task.mode === 'todo') skipped.push(task.name)
    for (const child of task.tasks ?? []) walk(child as typeof task)
  }
  walk(suite as never)
  if (skipped.length > 0) throw new Error(`REQUIRE_ALL=1, but these were skipped: ${skipped.join('; ')}`)
})
