import { jsonProblem } from '../server/compute/json-problem.ts'
import type { Problem } from '../server/documents/problem.ts'

/** An object from its JSON, or where the text stops being it. */
export function parseDocument(text: string): { document: Record<string, unknown> } | { problem: Problem } {
  try {
    const value: unknown = JSON.parse(text)
    if (isObject(value)) return { document: value }
  } catch {
    const problem = jsonProblem(text)
    if (problem !== null) return { problem: { ...problem, field: '' } }
  }
  return { problem: { field: '', detail: 'expected an object in braces', line: 1, column: 1 } }
}

const isObject = (value: unknown): value is Record<string, unknown> =>
  value !== null && typeof value === 'object' && !Array.isArray(value)
