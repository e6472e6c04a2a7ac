import { describe } from 'vitest'
import { describeWithPostgres } from '../support/needs.ts'
import { embeddedDatabase, serverDatabase } from '../store/engines.ts'
import { hubSuite } from './hub-suite.ts'

describe('streams on the embedded engine', () => hubSuite(() => embeddedDatabase()))
describeWithPostgres('streams on a server', () => hubSuite(() => serverDatabase()))
