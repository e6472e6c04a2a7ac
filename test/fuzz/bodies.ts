import type { z } from 'zod'
import { DOCUMENTS as SCHEMAS } from '../../server/compute/documents.ts'
import { openRequest } from '../../server/compute/forecast-jobs.ts'
import { openComparison } from '../../server/compute/sky-jobs.ts'
import { openVariants } from '../../server/compute/variant-jobs.ts'
import { openRacePlanRequest } from '../../server/compute/race-plan-jobs.ts'
import { openWhatIf } from '../../server/compute/what-if-jobs.ts'
import { coastDownRequest } from '../../server/documents/coast-down.ts'
import { speedsDocument } from '../../server/documents/speeds.ts'
import type { Kind } from './attempt.ts'
import {
  COAST_TABLES,
  COAST_TESTS,
  COMPARISONS,
  DOCUMENTS,
  GPX,
  RACE_PLANS,
  REQUESTS,
  ROUTE_TABLES,
  SKY_TABLES,
  SPEEDS,
  VARIANTS,
  WHAT_IFS,
} from './bases.ts'
import { oneByte, otherBytes } from './byte-mutation.ts'
import type { Chance } from './chance.ts'
import { hostileGpx, hostileTable, mutatedGpx, mutatedTable } from './file-mutation.ts'
import { mutatedJson, mutatedOften, type Mutated } from './json-mutation.ts'
import { type JsonSchema, published } from './schema-limits.ts'

export interface WrongBody extends Mutated {
  isOneOff: boolean
}

const onlyOne = (mutated: Mutated): WrongBody => ({ ...mutated, isOneOff: true })
const more = (mutated: Mutated): WrongBody => ({ ...mutated, isOneOff: false })

/** A JSON body: mostly with one value wrong, else with one byte, several values or all bytes wrong. */
export function wrongJson(by: Chance, document: unknown, schema: JsonSchema): WrongBody {
  const sort = by.below(100)
  if (sort < 74) return onlyOne(mutatedJson(by, document, schema))
  if (sort < 86) return onlyOne(oneByte(by, JSON.stringify(document)))
  if (sort < 94) return more(mutatedOften(by, document, schema))
  return more(otherBytes(by, JSON.stringify(document)))
}

const schemas = new Map<z.ZodType, JsonSchema>()

export function publishedOnce(schema: z.ZodType): JsonSchema {
  const known = schemas.get(schema) ?? published(schema)
  schemas.set(schema, known)
  return known
}

export const wrongDocument = (by: Chance, kind: Kind): WrongBody =>
  wrongJson(by, by.pick<unknown>(DOCUMENTS[kind]), publishedOnce(SCHEMAS[kind]))

export const wrongRequest = (by: Chance): WrongBody => wrongJson(by, by.pick(REQUESTS), publishedOnce(openRequest))

export const wrongComparison = (by: Chance): WrongBody =>
  wrongJson(by, by.pick<unknown>(COMPARISONS), publishedOnce(openComparison))

export const wrongWhatIf = (by: Chance): WrongBody =>
  wrongJson(by, by.pick<unknown>(WHAT_IFS), publishedOnce(openWhatIf))

export const wrongVariants = (by: Chance): WrongBody =>
  wrongJson(by, by.pick<unknown>(VARIANTS), publishedOnce(openVariants))

export const wrongRacePlan = (by: Chance): WrongBody =>
  wrongJson(by, by.pick<unknown>(RACE_PLANS), publishedOnce(openRacePlanRequest))

const NEW_FORECASTS = SPEEDS.flatMap((speeds) => [
  { carId: 'fuzz-car', skyId: 'fuzz-sky', speeds },
  { carId: 'fuzz-car', skyId: 'fuzz-sky', speeds, date: '2026-10-17' },
])

export function wrongNewForecast(by: Chance): WrongBody {
  const schema: JsonSchema = { properties: { speeds: publishedOnce(speedsDocument) } }
  return wrongJson(by, by.pick(NEW_FORECASTS), schema)
}

/** A file: half with one thing wrong in one place, a third with one byte, the rest hostile or in other bytes. */
function wrongFile(by: Chance, text: string, one: () => Mutated, hostile: () => Mutated): WrongBody {
  const sort = by.below(100)
  if (sort < 45) return onlyOne(one())
  if (sort < 75) return onlyOne(oneByte(by, text))
  return more(sort < 90 ? hostile() : otherBytes(by, text))
}

export const wrongGpx = (by: Chance): WrongBody =>
  wrongFile(
    by,
    GPX,
    () => mutatedGpx(by, GPX),
    () => hostileGpx(by, GPX),
  )

export function wrongTable(by: Chance, { text, delimiter }: { text: string; delimiter: string }): WrongBody {
  return wrongFile(
    by,
    text,
    () => mutatedTable(by, text, delimiter),
    () => hostileTable(by, text),
  )
}

export const wrongRouteTable = (by: Chance): WrongBody => wrongTable(by, by.pick(ROUTE_TABLES))

export function wrongSkyTable(by: Chance): WrongBody & { query: string } {
  const table = by.pick(SKY_TABLES)
  return { ...wrongTable(by, table), query: table.query }
}

/** A coast-down as JSON or as a table. */
export function wrongCoastDown(by: Chance): WrongBody & { query: string; type: string } {
  if (by.isLucky(0.5)) {
    const body = wrongJson(by, by.pick(COAST_TESTS), publishedOnce(coastDownRequest))
    return { ...body, query: '', type: 'application/json' }
  }
  const table = by.pick(COAST_TABLES)
  return { ...wrongTable(by, table), query: `?${table.query}`, type: 'text/csv' }
}
