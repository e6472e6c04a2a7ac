import { z } from 'zod'
import { coastRun } from '../documents/coast-down.ts'
import { DELIMITERS } from './csv-table.ts'
import type { FieldSpec } from './header.ts'

const TIME = ['time', 't', 'elapsed', 'elapsed time', 'time elapsed', 'seconds', 'clock', 'time of day', 'timestamp']
const STAMP = ['datetime', 'date time', 'date and time', 'utc', 'utc time', 'time utc', 'local time', 'time local']
const UNIT_OF_TIME = ['s', 'sec', 'secs', 'seconds', 'ms']

/** Every column that a logged coast-down may have, with the names it goes by. */
export const COAST_SPECS: FieldSpec[] = [
  ...UNIT_OF_TIME.map(
    (unit): FieldSpec => ({
      field: 'time',
      kind: 'time',
      names: ['time', 't', 'elapsed', 'elapsed time', 'timestamp'].map((name) => `${name} ${unit}`),
      bare: 'take',
      variant: unit,
    }),
  ),
  { field: 'time', kind: 'time', names: [...TIME, ...STAMP], bare: 'take' },
  {
    field: 'speedKmh',
    kind: 'roadSpeed',
    names: ['speed', 'v', 'velocity', 'car speed', 'vehicle speed', 'ground speed', 'gps speed', 'speed over ground'],
    bare: 'refuse',
  },
  { field: 'run', kind: 'text', names: ['run', 'run number', 'run no', 'run name', 'lap', 'pass'], bare: 'take' },
  { field: 'direction', kind: 'text', names: ['direction', 'way', 'dir', 'leg'], bare: 'take' },
  {
    field: 'headingDeg',
    kind: 'direction',
    names: ['heading', 'course', 'bearing', 'course over ground', 'cog', 'car heading', 'gps heading'],
    bare: 'take',
  },
  { field: 'gradePct', kind: 'slope', names: ['grade', 'slope', 'gradient', 'road grade', 'incline'], bare: 'say' },
  {
    field: 'headwindMps',
    kind: 'windSpeed',
    names: ['headwind', 'head wind', 'wind along', 'wind ahead', 'headwind at the car'],
    bare: 'refuse',
  },
  {
    field: 'crosswindMps',
    kind: 'windSpeed',
    names: ['crosswind', 'cross wind', 'side wind', 'sidewind', 'wind across'],
    bare: 'refuse',
  },
  {
    field: 'windMps',
    kind: 'windSpeed',
    names: ['wind', 'wind speed', 'windspeed', 'mean wind speed', 'wind velocity'],
    bare: 'refuse',
  },
  {
    field: 'windFromDeg',
    kind: 'direction',
    names: ['wind from', 'wind direction', 'wind dir', 'winddirection', 'wind direction from', 'direction from'],
    bare: 'take',
  },
]

const FIELDS = [
  'time',
  'speedKmh',
  'run',
  'direction',
  'headingDeg',
  'gradePct',
  'headwindMps',
  'crosswindMps',
  'windMps',
  'windFromDeg',
] as const
export type CoastField = (typeof FIELDS)[number]

/** What a person may say about a logged coast-down. */
export const coastTableOptions = z.strictObject({
  directions: z
    .enum(['alternate'])
    .optional()
    .describe('alternate: the runs go there and back in turn; left out: a column says it'),
  columns: z.partialRecord(z.enum(FIELDS), z.string().max(200)).optional().describe('header by field'),
  units: z.partialRecord(z.enum(FIELDS), z.string().max(40)).optional().describe('unit by field'),
  delimiter: z.enum(DELIMITERS).optional().describe('what parts the columns; found by itself when left out'),
  decimal: z.enum(['.', ',']).optional().describe('decimal sign; found by itself when left out'),
})
export type CoastTableOptions = z.input<typeof coastTableOptions>

const { speedKmh, gradePct, headwindMps } = coastRun.shape
const degrees = z.number().min(-360).max(360)
const windMps = z.number().min(0).max(40)

/** What each column of numbers may hold, as the coast-down document has it. */
export const COAST_RANGES = {
  speedKmh: speedKmh.element,
  gradePct: gradePct.unwrap().element,
  headwindMps: headwindMps.unwrap().element,
  crosswindMps: headwindMps.unwrap().element,
  windMps,
  headingDeg: degrees,
  windFromDeg: degrees,
} satisfies Partial<Record<CoastField, z.ZodNumber>>
export type CoastNumber = keyof typeof COAST_RANGES
