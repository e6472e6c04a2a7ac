import { limitsAt, type JsonSchema } from './schema-limits.ts'
import type { Chance } from './chance.ts'
import { changedAt, isObject, named, type Path, written } from './json-path.ts'
import {
  ODD,
  ODD_DATES,
  ODD_INSTANTS,
  ODD_KEYS,
  ODD_NUMBERS,
  ODD_TEXTS,
  ODD_TIMES,
  ODD_ZONES,
  type Odd,
} from './odd-values.ts'

/** A body made wrong, or perhaps not. */
export interface Mutated {
  what: string
  body: string | Buffer
  /** Nothing may be accepted so. */
  isWrong: boolean
  /** Field that a refusal must name, where it is known. */
  names: string | null
}

interface Edit extends Odd {
  path: Path
  /** Field to be named where it is not the one that was changed. */
  names?: string | null
}

/** A document with one value changed. */
export function mutatedJson(by: Chance, document: unknown, schema: JsonSchema): Mutated {
  const { path, value } = placeIn(by, document)
  const edit = by.pick(editsOf(by, path, value, schema))
  const changed = changedAt(document, edit.path, () => edit.value)
  const names = edit.names === undefined ? named(edit.path) : edit.names
  return {
    what: `${named(edit.path)}: ${edit.what}`,
    body: written(changed),
    isWrong: edit.isWrong,
    names: edit.isBare === true || !edit.isWrong ? null : names,
  }
}

/** Several values changed at once. */
export function mutatedOften(by: Chance, document: unknown, schema: JsonSchema): Mutated {
  let changed = document
  const what: string[] = []
  for (let n = 2 + by.below(3); n > 0; n--) {
    const { path, value } = placeIn(by, changed)
    const edit = by.pick(editsOf(by, path, value, schema))
    if (edit.isBare === true) continue
    changed = changedAt(changed, edit.path, () => edit.value)
    what.push(`${named(edit.path)}: ${edit.what}`)
  }
  return { what: what.join('; '), body: written(changed), isWrong: false, names: null }
}

/** Any place of a document: down from the top, one child at a time, mostly to a leaf. */
function placeIn(by: Chance, document: unknown): { path: Path; value: unknown } {
  let value = document
  const path: Path = []
  for (;;) {
    const keys: Path = Array.isArray(value) ? [...value.keys()] : isObject(value) ? Object.keys(value) : []
    if (keys.length === 0 || (path.length > 0 && by.isLucky(0.15))) return { path, value }
    const key = by.pick(keys)
    path.push(key)
    value = Array.isArray(value) ? value[Number(key)] : isObject(value) ? value[key] : undefined
  }
}

function editsOf(by: Chance, path: Path, value: unknown, schema: JsonSchema): Edit[] {
  const here = (odd: Odd): Edit => ({ ...odd, path })
  const gone: Edit = { what: 'left out', value: undefined, isWrong: false, path }
  const anywhere = path.length === 0 ? [] : [gone, here(by.pick(ODD))]
  if (typeof value === 'number') return [...anywhere, ...ODD_NUMBERS.map(here), ...beyondLimits(path, schema)]
  if (typeof value === 'string') return [...anywhere, ...ODD_TEXTS.map(here), ...oddOfSort(value, path)]
  if (typeof value === 'boolean') return [...anywhere, here({ what: 'true as text', value: 'true', isWrong: true })]
  if (Array.isArray(value)) return [...anywhere, ...listEdits(by, path, value)]
  return isObject(value) ? [...anywhere, ...objectEdits(by, path, value)] : anywhere
}

/** One past each end of the range, well past it, and each end itself. */
function beyondLimits(path: Path, schema: JsonSchema): Edit[] {
  const { minimum, maximum } = limitsAt(schema, path)
  const edits: Edit[] = []
  if (minimum !== undefined)
    edits.push(
      { what: 'one below the least', value: minimum - 1, isWrong: true, path },
      { what: 'the least', value: minimum, isWrong: false, path },
    )
  if (maximum !== undefined)
    edits.push(
      { what: 'one above the most', value: maximum + 1, isWrong: true, path },
      { what: 'the most', value: maximum, isWrong: false, path },
    )
  return [...edits, ...edits]
}

function oddOfSort(value: string, path: Path): Edit[] {
  const sorts: [RegExp, string[]][] = [
    [/^\d{4}-\d\d-\d\d$/, ODD_DATES],
    [/^\d{4}-\d\d-\d\dT/, ODD_INSTANTS],
    [/^\d\d:\d\d/, ODD_TIMES],
    [/^[A-Z]\w+\/\w+$|^UTC$/, ODD_ZONES],
  ]
  const [, odd] = sorts.find(([sort]) => sort.test(value)) ?? [null, []]
  return odd.map((text) => ({ what: `"${text}"`, value: text, isWrong: true, path }))
}

function listEdits(by: Chance, path: Path, list: unknown[]): Edit[] {
  const [a, b] = [by.below(list.length), by.below(list.length)]
  const swapped = list.map((entry, i) => (i === a ? list[b] : i === b ? list[a] : entry))
  return [
    { what: 'no list', value: {}, isWrong: true, path },
    { what: 'null', value: null, isWrong: true, path },
    { what: 'a list as text', value: JSON.stringify(list), isWrong: true, path },
    { what: 'an empty list', value: [], isWrong: false, path },
    { what: `entry ${a} twice`, value: [...list, list[a]], isWrong: false, path },
    { what: `entry ${a} taken out`, value: list.filter((_, i) => i !== a), isWrong: false, path },
    { what: `entries ${a} and ${b} swapped`, value: swapped, isWrong: false, path },
    { what: 'null at its end', value: [...list, null], isWrong: false, path },
    {
      what: '3000 entries',
      value: Array.from({ length: 3000 }, (_, i) => list[i % list.length]),
      isWrong: false,
      path,
    },
  ]
}

const PAIRS = [
  ['from', 'to'],
  ['fromKm', 'toKm'],
  ['inputMinV', 'inputMaxV'],
  ['outputMinV', 'outputMaxV'],
  ['cellMinV', 'cellMaxV'],
  ['opensAt', 'closesAt'],
  ['lowestKmh', 'highestKmh'],
  ['tiltMinDeg', 'tiltMaxDeg'],
]
const MIXED = [
  ['latDeg', 'lonDeg'],
  ['name', 'tracker'],
  ['date', 'driving'],
  ['car', 'race'],
  ['airTempC', 'cloudPct'],
  ['start', 'finish'],
]

function objectEdits(by: Chance, path: Path, object: Record<string, unknown>): Edit[] {
  const key = by.pick(ODD_KEYS)
  const long = 'k'.repeat(50_000)
  const swaps = [...PAIRS, ...MIXED].filter(([a, b]) => a in object && b in object)
  return [
    { what: 'a list instead', value: [], isWrong: true, path },
    { what: 'text instead', value: 'x', isWrong: true, path },
    { what: 'null instead', value: null, isWrong: true, path },
    { what: 'an empty object', value: {}, isWrong: false, path },
    ...[key, key, by.pick(ODD_KEYS)].map((odd) => ({
      what: `unknown key ${JSON.stringify(odd)}`,
      value: { ...object, [odd]: 1 },
      isWrong: true,
      path,
      names: path.length === 0 ? odd || null : named(path),
    })),
    { what: 'a key of 50,000 letters', value: { ...object, [long]: 1 }, isWrong: true, path, names: null },
    { what: 'a key with half a character', value: { ...object, 'x\ud83d': {} }, isWrong: true, path, names: null },
    ...swaps.map(([a, b]) => ({
      what: `${a} and ${b} swapped`,
      value: { ...object, [a]: object[b], [b]: object[a] },
      isWrong: PAIRS.some(([one]) => one === a) && object[a] !== object[b],
      path,
    })),
  ]
}
