/** One thing that is wrong with what somebody sent: which field, what stood there, what was expected. */
export interface Problem {
  /** Path of the field in the document, for example `panels[2].pitchDeg`; for a file the column or element. */
  field: string
  /** What stood there, shortened; left out where nothing did. */
  value?: string
  /** One plain sentence: what was expected. */
  detail: string
  /** Place in a file, counted from 1; left out for documents. */
  line?: number
  column?: number
}

const LONGEST_VALUE = 60

/** A value as a reader may see it in a message: JSON, at most 60 characters. */
export function shownValue(value: unknown): string | undefined {
  if (value === undefined) return undefined
  const text =
    typeof value === 'string' ? JSON.stringify(value) : typeof value === 'number' ? String(value) : inBrief(value)
  return shortened(text, LONGEST_VALUE)
}

/** A text of at most so many characters, and a mark where more stood. */
export const shortened = (text: string, longest: number): string =>
  text.length > longest ? `${text.slice(0, longest)}…` : text

function inBrief(value: unknown): string {
  if (Array.isArray(value)) return `a list of ${value.length}`
  if (value !== null && typeof value === 'object') return 'an object'
  return String(value)
}
