/** The parts of JSON Schema that the published schemas use. */
export interface JsonSchema {
  $ref?: string
  title?: string
  description?: string
  type?: string | string[]
  const?: unknown
  enum?: unknown[]
  default?: unknown
  minimum?: number
  maximum?: number
  minItems?: number
  maxItems?: number
  minLength?: number
  maxLength?: number
  pattern?: string
  format?: string
  properties?: Record<string, JsonSchema>
  required?: string[]
  additionalProperties?: JsonSchema | boolean
  items?: JsonSchema
  anyOf?: JsonSchema[]
  oneOf?: JsonSchema[]
  examples?: unknown[]
}

export interface FieldRow {
  path: string
  type: string
  /** Name of the component that describes the field. */
  component?: string
  meaning: string
  range: string
  default: string
  isRequired: boolean
}

/** Every field of a schema, nested ones with their path: `panels[].pitchDeg`. */
export const fieldRows = (schema: JsonSchema): FieldRow[] => inside(schema, '', true)

function inside(schema: JsonSchema, path: string, isRequired: boolean): FieldRow[] {
  const rows = Object.entries(schema.properties ?? {}).flatMap(([name, field]) => {
    const at = path === '' ? name : `${path}.${name}`
    return fieldAndBelow(field, at, isRequired && (schema.required ?? []).includes(name))
  })
  const { additionalProperties: others } = schema
  if (typeof others === 'object') rows.push(...fieldAndBelow(others, `${path}${path === '' ? '' : '.'}{name}`, false))
  if (schema.items !== undefined && schema.$ref === undefined) rows.push(...belowOnly(schema.items, `${path}[]`))
  for (const choice of branches(schema)) rows.push(...inside(choice, path, false))
  return rows
}

const belowOnly = (schema: JsonSchema, path: string): FieldRow[] =>
  schema.$ref === undefined ? inside(schema, path, true) : [row(schema, path, false)]

const fieldAndBelow = (schema: JsonSchema, path: string, isRequired: boolean): FieldRow[] => [
  row(schema, path, isRequired),
  ...inside(schema, path, true),
]

const branches = (schema: JsonSchema): JsonSchema[] => [...(schema.anyOf ?? []), ...(schema.oneOf ?? [])]

function row(schema: JsonSchema, path: string, isRequired: boolean): FieldRow {
  const component =
    componentOf(schema) ??
    branches(schema)
      .map(componentOf)
      .find((name) => name !== undefined)
  return {
    path,
    type: typeOf(schema),
    ...(component === undefined ? {} : { component }),
    meaning: schema.description ?? '',
    range: rangeOf(schema),
    default: schema.default === undefined ? '' : JSON.stringify(schema.default),
    isRequired: isRequired && schema.default === undefined,
  }
}

/** Name of the component that a schema refers to. */
export const componentOf = (schema: JsonSchema): string | undefined => schema.$ref?.split('/').at(-1)

const WORDS: Record<string, string> = {
  number: 'number',
  integer: 'whole number',
  string: 'text',
  boolean: 'true or false',
  array: 'list',
  object: 'object',
  null: 'null',
}

/** A schema's type in words. */
export function typeOf(schema: JsonSchema): string {
  if (schema.$ref !== undefined) return componentOf(schema) ?? 'object'
  const choices = branches(schema)
  if (choices.length > 0) return [...new Set(choices.map(typeOf))].join(' or ')
  if (schema.const !== undefined) return JSON.stringify(schema.const)
  if (schema.enum !== undefined) return schema.enum.map((value) => JSON.stringify(value)).join(' or ')
  if (schema.type === 'array' && schema.items !== undefined) return `list of ${typeOf(schema.items)}`
  return [schema.type ?? 'anything']
    .flat()
    .map((type) => WORDS[type] ?? type)
    .join(' or ')
}

function rangeOf(schema: JsonSchema): string {
  const source = branches(schema)[0] ?? schema
  const value = source.type === 'array' ? (source.items ?? source) : source
  const inner = branches(value)[0] ?? value
  const counts = between(source.minItems, source.maxItems, 'entries')
  const isSafeBound = Math.abs(inner.maximum ?? 0) === Number.MAX_SAFE_INTEGER
  const numbers = isSafeBound ? '' : between(inner.minimum, inner.maximum, '')
  return [counts, numbers, between(inner.minLength, inner.maxLength, 'characters')]
    .filter((text) => text !== '')
    .join(', each ')
}

function between(min: number | undefined, max: number | undefined, unit: string): string {
  const numbers = max === undefined ? (min === undefined ? '' : `${min} or more`) : `${min ?? 0} to ${max}`
  return numbers === '' ? '' : `${numbers} ${unit}`.trim()
}
