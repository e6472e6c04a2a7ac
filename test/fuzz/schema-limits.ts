import { z } from 'zod'
import type { Path } from './json-path.ts'

export interface JsonSchema {
  properties?: Record<string, JsonSchema>
  additionalProperties?: JsonSchema | boolean
  items?: JsonSchema
  anyOf?: JsonSchema[]
  oneOf?: JsonSchema[]
  minimum?: number
  maximum?: number
}

/** A document's schema as the API publishes it. */
export const published = (schema: z.ZodType): JsonSchema =>
  // Only limits are read from it.
  JSON.parse(JSON.stringify(z.toJSONSchema(schema, { io: 'input', unrepresentable: 'any', reused: 'inline' })))

/** The least and the most that a number may be at a place of a document. */
export function limitsAt(schema: JsonSchema, [step, ...rest]: Path): { minimum?: number; maximum?: number } {
  const branches = [...(schema.anyOf ?? []), ...(schema.oneOf ?? [])]
  if (step === undefined) {
    const { minimum, maximum } = [schema, ...branches].find((one) => one.minimum !== undefined) ?? schema
    return { minimum, maximum }
  }
  const inner =
    typeof step === 'number'
      ? schema.items
      : (schema.properties?.[step] ??
        (typeof schema.additionalProperties === 'object' ? schema.additionalProperties : undefined))
  if (inner !== undefined) return limitsAt(inner, rest)
  for (const branch of branches) {
    const found = limitsAt(branch, [step, ...rest])
    if (found.maximum !== undefined) return found
  }
  return {}
}
