import type { UnitKind, Unit } from './units.ts'
import { unitNamed } from './units.ts'

/** What a stamp speaks for, as the sky document has it. */
export type Averaging = 'preceding' | 'following' | 'instant'

/** A column that a table may have, and how its header may name it. */
export interface FieldSpec {
  field: string
  kind: UnitKind
  /** Small letters, words parted by one space. */
  names: string[]
  /** Height above ground that the header may mention; another height is another quantity. [m] */
  heightM?: number
  /** What to do when no unit is stated: take the document's, take it and say so, or refuse. */
  bare: 'take' | 'say' | 'refuse'
  /** What the names add to the field, for example that a pressure is at sea level. */
  variant?: string
}

export interface HeaderMatch {
  spec: FieldSpec
  unit?: Unit
  convention?: Averaging
  /** Parts in brackets that are neither. */
  notes: string[]
}

const CONVENTIONS: [Averaging, RegExp][] = [
  ['preceding', /\b(?:preceding|previous|past|before|ending)\b/],
  ['following', /\b(?:following|next|after|beginning|starting)\b/],
  ['instant', /\b(?:instant|instantaneous|momentary|snapshot)\b/],
]
const MOST_UNIT_WORDS = 4

/** What a header says of one kind of column, or null when it names something else. */
export function matchHeader({ words, parts }: HeaderParts, spec: FieldSpec): HeaderMatch | null {
  const said = conventionIn(words.join(' '))
  const cut = said === undefined ? words : wordsBeside(words, said)
  for (const candidate of said === undefined ? [words] : [words, cut]) {
    const named = nameAndUnit(candidate, spec)
    if (named === null) continue
    const fromParts = readParts(parts, spec)
    if (fromParts === null) return null
    const convention = fromParts.convention ?? (candidate === cut ? said : undefined)
    return { spec, unit: fromParts.unit ?? named.unit, convention, notes: fromParts.notes }
  }
  return null
}

/** What a header that was mapped by hand says of unit and convention, whatever its name. */
export function readMapped(header: string, spec: FieldSpec): HeaderMatch {
  const { words, parts } = headerParts(header)
  const { unit, convention, notes } = readParts(parts, spec) ?? { notes: [] }
  return {
    spec,
    unit: unit ?? trailingUnits(words, spec)[0]?.unit,
    convention: convention ?? conventionIn(words.join(' ')),
    notes,
  }
}

export interface HeaderParts {
  words: string[]
  /** What stands in brackets, parted at commas. */
  parts: string[]
}

/** A header as words in small letters and the parts in its brackets. */
export function headerParts(header: string): HeaderParts {
  const parts: string[] = []
  const rest = header.replace(/[([{]([^)\]}]*)[)\]}]/g, (_, inner: string) => {
    parts.push(...inner.split(/[,;]/).map((part) => part.trim()))
    return ' '
  })
  const words = rest
    .replace(/([a-z0-9])([A-Z])/g, '$1 $2')
    .toLowerCase()
    .split(/[^a-z0-9%°²]+/)
  return { words: words.filter((word) => word !== ''), parts: parts.filter((part) => part !== '') }
}

const conventionIn = (text: string): Averaging | undefined =>
  CONVENTIONS.find(([, pattern]) => pattern.test(text.toLowerCase()))?.[0]

const FILLERS = new Set(['mean', 'average', 'avg', 'hour', 'hourly', 'minutes', 'min', 'interval', 'of', 'the', 'over'])

/** The words without those that state the convention. */
function wordsBeside(words: string[], said: Averaging): string[] {
  const pattern = CONVENTIONS.find(([name]) => name === said)?.[1] ?? /$^/
  return words.filter((word) => !pattern.test(word) && !FILLERS.has(word))
}

function nameAndUnit(words: string[], spec: FieldSpec): { unit?: Unit } | null {
  if (isNamed(words, spec)) return {}
  return trailingUnits(words, spec).find(({ before }) => isNamed(before, spec)) ?? null
}

function trailingUnits(words: string[], spec: FieldSpec): { unit: Unit; before: string[] }[] {
  const found: { unit: Unit; before: string[] }[] = []
  for (let k = Math.min(MOST_UNIT_WORDS, words.length - 1); k >= 1; k--) {
    const unit = unitNamed(spec.kind, words.slice(-k).join(''))
    if (unit !== undefined) found.push({ unit, before: words.slice(0, -k) })
  }
  return found
}

function isNamed(words: string[], { names, heightM }: FieldSpec): boolean {
  const name = words.join(' ')
  if (names.includes(name)) return true
  if (heightM === undefined) return false
  return names.includes(name.replace(new RegExp(`(?:^| )(?:at )?${heightM} ?m(?= |$)`), '').trim())
}

/** Brackets hold a unit, a convention, a height or notes; null when the height is not this column's. */
function readParts(parts: string[], spec: FieldSpec): Omit<HeaderMatch, 'spec'> | null {
  const read: Omit<HeaderMatch, 'spec'> = { notes: [] }
  for (const part of parts) {
    const unit = unitNamed(spec.kind, part)
    const height = /^(?:at )?(\d+) ?m$/.exec(part.toLowerCase())?.[1]
    if (unit !== undefined) read.unit = unit
    else if (conventionIn(part) !== undefined) read.convention = conventionIn(part)
    else if (height === undefined || spec.heightM === undefined) read.notes.push(part)
    else if (Number(height) !== spec.heightM) return null
  }
  return read
}
