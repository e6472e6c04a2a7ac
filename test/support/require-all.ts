import type { Reporter, TestModule } from 'vitest/node'

/** Under REQUIRE_ALL=1 a skipped test is a failure: what did not run must not pass. */
export default class RequireAll implements Reporter {
  onTestRunEnd(modules: readonly TestModule[]): void {
    if (process.env.REQUIRE_ALL !== '1') return
    const skipped = modules.flatMap((module) => [...module.children.allTests('skipped')].map((test) => test.fullName))
    if (skipped.length === 0) return
    console.error(`REQUIRE_ALL=1, but ${skipped.length} tests were skipped:\n  ${skipped.join('\n  ')}`)
    process.exitCode = 1
  }
}
