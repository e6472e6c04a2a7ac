import { describe } from 'vitest'
import { describeWithPostgres } from '../support/needs.ts'
import { accessSuite } from './access-suite.ts'
import { choiceSuite } from './choice-suite.ts'
import { embeddedDatabase, serverDatabase, type TestDatabase } from './engines.ts'
import { eventSuite } from './event-suite.ts'
import { historySuite } from './history-suite.ts'
import { planSuite } from './plan-suite.ts'
import { readingSuite } from './reading-suite.ts'
import { variantSuite } from './variant-suite.ts'

const SUITES: [name: string, suite: (open: () => Promise<TestDatabase>) => void][] = [
  ['links and sessions', accessSuite],
  ['readings', readingSuite],
  ['the choice of a day', choiceSuite],
  ['the history', historySuite],
  ['events', eventSuite],
  ['kept plans', planSuite],
  ['variants of plans', variantSuite],
]

for (const [name, suite] of SUITES) {
  describe(`${name} on the embedded engine`, () => suite(() => embeddedDatabase()))
  describeWithPostgres(`${name} on a server`, () => suite(() => serverDatabase()))
  describeWithPostgres(`${name} on a server with one connection`, () => suite(() => serverDatabase({ max: 1 })))
}
