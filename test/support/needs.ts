import { existsSync } from 'node:fs'
import { describe } from 'vitest'

const CHROMIUM_PLACES = ['/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome']

/** Path of a Chromium to drive: CHROMIUM_PATH, or one of the usual places; null where there is none. */
export const chromiumPath = (): string | null =>
  [process.env.CHROMIUM_PATH ?? '', ...CHROMIUM_PLACES].find((place) => place !== '' && existsSync(place)) ?? null

/** Address of a PostgreSQL server that tests may use; only ever TEST_DATABASE_URL. */
export const testDatabaseUrl = (): string | null => process.env.TEST_DATABASE_URL || null

function unless(isThere: boolean, what: string, how: string): typeof describe | typeof describe.skip {
  if (isThere) return describe
  if (process.env.REQUIRE_ALL === '1') throw new Error(`REQUIRE_ALL=1, but there is no ${what}. ${how}`)
  console.warn(`skipped: no ${what}. ${how}`)
  return describe.skip
}

/** `describe` for suites that need a PostgreSQL server; says how to run them where there is none. */
export const describeWithPostgres = unless(
  testDatabaseUrl() !== null,
  'PostgreSQL server',
  'Set TEST_DATABASE_URL=postgres://user@host:5432/database to run this suite.',
)

/** `describe` for suites that need a browser; says how to run them where there is none. */
export const describeWithBrowser = unless(
  chromiumPath() !== null,
  'Chromium',
  'Install Chromium or set CHROMIUM_PATH to run this suite.',
)
