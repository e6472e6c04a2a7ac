import { JsonText } from '../store/json-text.ts'

/** An answer as JSON; kept texts among its fields are put in as they are, after the others. */
export function serialized(answer: unknown): string {
  if (typeof answer !== 'object' || answer === null) return JSON.stringify(answer)
  const texts: string[] = []
  const others: [string, unknown][] = []
  for (const [name, value] of Object.entries(answer))
    if (value instanceof JsonText) texts.push(`${JSON.stringify(name)}:${value.text}`)
    else others.push([name, value])
  if (texts.length === 0) return JSON.stringify(answer)
  const rest = JSON.stringify(Object.fromEntries(others)).slice(1, -1)
  return `{${[...(rest === '' ? [] : [rest]), ...texts].join(',')}}`
}
