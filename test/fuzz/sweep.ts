import { changedAt, isObject, named, type Path } from './json-path.ts'
import { type JsonSchema, limitsAt } from './schema-limits.ts'

interface Wrong {
  field: string
  document: unknown
}

/** A document with a stray key in each of its objects in turn, and with each number past its limits. */
export function sweep(document: unknown, schema: JsonSchema): Wrong[] {
  return placesIn(document, []).flatMap(([path, value]) => {
    const wrong = (field: Path, change: unknown): Wrong => ({
      field: named(field),
      document: changedAt(document, path, () => change),
    })
    if (isObject(value)) return [wrong([...path, 'mood'], { ...value, mood: 1 })]
    if (typeof value !== 'number') return []
    const { minimum, maximum } = limitsAt(schema, path)
    return [
      ...(minimum === undefined ? [] : [wrong(path, minimum - 1)]),
      ...(maximum === undefined ? [] : [wrong(path, maximum + 1)]),
    ]
  })
}

/** Every value of a document; of a column of numbers only the first. */
function placesIn(value: unknown, path: Path): [Path, unknown][] {
  const inner = isObject(value)
    ? Object.entries(value)
    : Array.isArray(value)
      ? [...value.entries()].slice(0, isObject(value[0]) ? undefined : 1)
      : []
  return [[path, value], ...inner.flatMap(([key, one]) => placesIn(one, [...path, key]))]
}
