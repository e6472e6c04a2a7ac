import { z } from 'zod'
import { DOCUMENTS } from '../compute/documents.ts'
import { openRequest } from '../compute/forecast-jobs.ts'
import { openRacePlanRequest } from '../compute/race-plan-jobs.ts'
import { openComparison } from '../compute/sky-jobs.ts'
import { openVariants } from '../compute/variant-jobs.ts'
import { openWhatIf } from '../compute/what-if-jobs.ts'
import { coastDownRequest } from '../documents/coast-down.ts'
import { coastDownDocument } from '../documents/coast-down-result.ts'
import { budgetDocument } from '../documents/budget.ts'
import { pointingDocument } from '../documents/pointing.ts'
import { racePlanDocument } from '../documents/race-plan.ts'
import { readingDocument } from '../documents/reading.ts'
import { skyComparison } from '../documents/sky-comparison.ts'
import { speedsDocument } from '../documents/speeds.ts'
import { trackerDay } from '../documents/tracker-day.ts'
import { trackerDays } from '../documents/tracker-days.ts'
import { variantAnswer } from '../documents/variant.ts'
import { whatIfDocument } from '../documents/what-if.ts'
import { problemSchema } from './answers.ts'

type JsonSchema = Record<string, unknown>
type Direction = 'input' | 'output'

interface Component {
  schema: z.ZodType
  direction: Direction
  /** Worked example that is shown with it. */
  example?: string
}

/** Schemas that the description names once and refers to, as they are sent in or come out. */
export const COMPONENTS: Record<string, Component> = {
  Car: { schema: DOCUMENTS.car, direction: 'input', example: 'car' },
  Route: { schema: DOCUMENTS.route, direction: 'input', example: 'route' },
  Race: { schema: DOCUMENTS.race, direction: 'input', example: 'race' },
  Sky: { schema: DOCUMENTS.sky, direction: 'input', example: 'sky' },
  Reading: { schema: readingDocument, direction: 'input' },
  Speeds: { schema: speedsDocument, direction: 'input', example: 'speeds' },
  ForecastRequest: { schema: openRequest, direction: 'input', example: 'forecast-request' },
  SkyComparisonRequest: { schema: openComparison, direction: 'input', example: 'sky-comparison' },
  SkyComparison: { schema: skyComparison, direction: 'output' },
  WhatIfRequest: { schema: openWhatIf, direction: 'input', example: 'what-if-request' },
  WhatIf: { schema: whatIfDocument, direction: 'output' },
  RacePlanRequest: { schema: openRacePlanRequest, direction: 'input', example: 'race-plan-request' },
  RacePlan: { schema: racePlanDocument, direction: 'output' },
  VariantsRequest: { schema: openVariants, direction: 'input', example: 'variants-request' },
  VariantAnswer: { schema: variantAnswer, direction: 'output' },
  CoastDownTest: { schema: coastDownRequest, direction: 'input', example: 'coast-down' },
  CoastDownResult: { schema: coastDownDocument, direction: 'output' },
  Budget: { schema: budgetDocument, direction: 'output' },
  TrackerDay: { schema: trackerDay, direction: 'output' },
  TrackerDays: { schema: trackerDays, direction: 'output' },
  Pointing: { schema: pointingDocument, direction: 'output' },
  Problem: { schema: problemSchema, direction: 'output' },
}

const NAMES = new Map<unknown, string>(Object.entries(COMPONENTS).map(([name, { schema }]) => [schema, name]))

/** A schema as JSON Schema 2020-12; components in it become references. */
export function jsonSchema(schema: z.ZodType, direction: Direction, isComponent = false): JsonSchema {
  const name = NAMES.get(schema)
  if (name !== undefined && !isComponent) return referenceTo(name)
  const whole: JsonSchema = z.toJSONSchema(schema, {
    io: direction,
    unrepresentable: 'any',
    override: ({ zodSchema, jsonSchema: inner, path }) => {
      const part = NAMES.get(zodSchema)
      if (part === undefined || path.length === 0) return
      for (const key of Object.keys(inner)) Reflect.deleteProperty(inner, key)
      Object.assign(inner, referenceTo(part))
    },
  })
  delete whole.$schema
  return whole
}

const referenceTo = (name: string): JsonSchema => ({ $ref: `#/components/schemas/${name}` })

/** Every component, by its name. */
export const componentSchemas = (): Record<string, JsonSchema> =>
  Object.fromEntries(
    Object.entries(COMPONENTS).map(([name, { schema, direction }]) => [name, jsonSchema(schema, direction, true)]),
  )

/** A route's schemas as JSON Schema, for the description of the API. */
export function publishedRoute(schema: JsonSchema): JsonSchema {
  const { params, querystring, body, response, ...rest } = schema
  return {
    ...rest,
    ...published('params', params, 'input'),
    ...published('querystring', querystring, 'input'),
    ...published('body', body, 'input'),
    ...(typeof response === 'object' && response !== null ? { response: publishedAnswers(response) } : {}),
  }
}

function published(name: string, part: unknown, direction: Direction): JsonSchema {
  if (part instanceof z.ZodType) return { [name]: jsonSchema(part, direction) }
  return typeof part === 'object' && part !== null ? { [name]: withContent(part, direction) } : {}
}

const publishedAnswers = (response: unknown): JsonSchema =>
  Object.fromEntries(Object.entries(response ?? {}).map(([status, answer]) => [status, withContent(answer, 'output')]))

interface WithContent {
  content?: Record<string, { schema: z.ZodType }>
}

/** An answer without content is written `type: null`, which the description shows as no content. */
function withContent(part: WithContent, direction: Direction): JsonSchema {
  const { content, ...rest } = part
  if (content === undefined) return { ...rest, type: 'null' }
  const types = Object.entries(content).map(([type, { schema }]) => [type, { schema: jsonSchema(schema, direction) }])
  return { ...rest, content: Object.fromEntries(types) }
}
