import { describe } from 'vitest'
import { describeWithPostgres } from '../support/needs.ts'
import { documentSuite } from './document-suite.ts'
import { embeddedDatabase, serverDatabase } from './engines.ts'
import { forecastSuite } from './forecast-suite.ts'

describe('documents on the embedded engine', () => documentSuite(() => embeddedDatabase()))
describe('forecasts on the embedded engine', () => forecastSuite(() => embeddedDatabase()))

describeWithPostgres('documents on a server', () => documentSuite(() => serverDatabase()))
describeWithPostgres('forecasts on a server', () => forecastSuite(() => serverDatabase()))

describeWithPostgres('documents on a server with one connection', () => documentSuite(() => serverDatabase({ max: 1 })))
describeWithPostgres('forecasts on a server with one connection', () => forecastSuite(() => serverDatabase({ max: 1 })))
