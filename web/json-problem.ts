import type { Problem } from '../server/documents/problem.ts'

/** An object from its JSON, or where the text stops being JSON. */
export function parseDocument(text: string): { document: Record<string, unknown> } | { problem: Problem } {
  let value: unknown
  try {
    value = JSON.parse(text)
  } catch (error) {
    const message = error instanceof Error ? error.message : String(error)
    return { problem: { field: '', detail: 'not readable as JSON from here on', ...placeIn(text, message) } }
  }
  if (value === null || typeof value !== 'object' || Array.isArray(value))
    return { problem: { field: '', detail: 'expected an object in braces', line: 1, column: 1 } }
  return { document: value as Record<string, unknown> }
}

/** Browsers say in their message where they stopped, as a position or as line and column; else the end is meant. */
function placeIn(text: string, message: string): { line: number; column: number } {
  const told = /line (\d+) column (\d+)/.exec(message)
  if (told !== null) return { line: Number(told[1]), column: Number(told[2]) }
  const position = /position (\d+)/.exec(message)
  const before = text.slice(0, position === null ? text.length : Number(position[1])).split('\n')
  return { line: before.length, column: before[before.length - 1].length + 1 }
}
