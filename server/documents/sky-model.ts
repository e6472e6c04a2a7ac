import { stationFromSeaLevelPa, vapourFromDewPointPa, vapourFromHumidityPa } from '../engine/air.ts'
import { InputError } from '../engine/input-error.ts'
import { prepareSky, skyCoverage } from '../engine/sky.ts'
import type { Sky, SkyPlaceInput } from '../engine/sky.ts'
import { localIso } from './local-time.ts'
import type { SkyColumn, SkyDocument, SkyPlace } from './sky.ts'
import { monthKnots } from './turbidity.ts'

const DEG = Math.PI / 180

/** Linke turbidity where a sky brings none: dry rural air. Common practice, no source. */
export const LINKE_DEFAULT = 3

/** The engine's column for each column of the document. */
const ENGINE_COLUMNS = {
  cloudPct: 'cloudFraction',
  ghiWm2: 'ghiWm2',
  dniWm2: 'dniWm2',
  dhiWm2: 'dhiWm2',
  airTempC: 'airC',
  humidityPct: 'vapourPa',
  dewPointC: 'vapourPa',
  windMps: 'windMps',
  gustMps: 'gustMps',
  windFromDeg: 'windFromRad',
  pressureHpa: 'pressurePa',
  turbidity: 'linke',
} as const satisfies Record<SkyColumn, string>

/** Light and cloud are means over the interval before their stamp unless the document says otherwise. */
const PRECEDING: ReadonlySet<SkyColumn> = new Set(['cloudPct', 'ghiWm2', 'dniWm2', 'dhiWm2'])

/**
 * A sky as the engine needs it, and what was assumed where the document is silent.
 *
 * @param linkeByMonth  of the race, for a sky without any turbidity of its own
 */
export function skyModel(sky: SkyDocument, linkeByMonth?: readonly number[]): { sky: Sky; assumptions: string[] } {
  const prepared = prepareSky({ places: skyInputs(sky, linkeByMonth), linkeDefault: LINKE_DEFAULT })
  const byMonth = monthsOf(sky, linkeByMonth)
  return { sky: prepared, assumptions: [...silences(sky, byMonth), ...corrections(sky, prepared)] }
}

/**
 * The tables of a sky in the engine's units, place by place.
 *
 * @param field  where the places stand, for messages
 */
export const skyInputs = (sky: SkyDocument, linkeByMonth?: readonly number[], field = 'sky.places'): SkyPlaceInput[] =>
  sky.places.map((place, p) => withMonths(placeInput(sky, place, `${field}[${p}]`), monthsOf(sky, linkeByMonth)))

/** Turbidity by month where no place brings a column of it. */
const monthsOf = (sky: SkyDocument, ofRace?: readonly number[]): readonly number[] | undefined =>
  sky.places.some(({ turbidity }) => turbidity !== undefined) ? undefined : (sky.turbidityByMonth ?? ofRace)

/** A place with turbidity by month in place of a column. */
function withMonths(input: SkyPlaceInput, byMonth: readonly number[] | undefined): SkyPlaceInput {
  if (byMonth === undefined) return input
  const { atMs, linke } = monthKnots(byMonth, input.fromMs[0], input.toMs[input.toMs.length - 1])
  return { ...input, linke, intervalOf: { ...input.intervalOf, linke: { fromMs: atMs, toMs: atMs } } }
}

function placeInput(sky: SkyDocument, place: SkyPlace, field: string): SkyPlaceInput {
  const at = Float64Array.from(place.at, Date.parse)
  const input: SkyPlaceInput = {
    latRad: place.latDeg * DEG,
    lonRad: place.lonDeg * DEG,
    altM: place.elevationM,
    ...intervals(at, 'instant'),
    intervalOf: {},
  }
  // Columns of one convention share their rows, so that the engine integrates the clear sky over them once.
  const shared = { preceding: intervals(at, 'preceding'), following: intervals(at, 'following') }
  for (const [name, column] of Object.entries(ENGINE_COLUMNS) as [SkyColumn, (typeof ENGINE_COLUMNS)[SkyColumn]][]) {
    const values = place[name]
    if (values === undefined) continue
    input[column] = Float64Array.from(values, (value, i) =>
      value === null ? Number.NaN : toEngine(sky, place, { name, row: i, field: `${field}.${name}[${i}]` }, value),
    )
    const convention = sky.averaging[name] ?? (PRECEDING.has(name) ? 'preceding' : 'instant')
    if (convention !== 'instant') (input.intervalOf ??= {})[column] = shared[convention]
  }
  return input
}

/** One cell in the engine's unit; what depends on the air temperature of its row is missing where that is. */
function toEngine(
  sky: SkyDocument,
  place: SkyPlace,
  cell: { name: SkyColumn; row: number; field: string },
  value: number,
): number {
  const airC = place.airTempC?.[cell.row] ?? Number.NaN
  switch (cell.name) {
    case 'cloudPct':
      return value / 100
    case 'humidityPct':
      return believed(
        vapourFromHumidityPa(airC, value / 100),
        0,
        MOST_VAPOUR_PA,
        cell.field,
        `${value} % at ${airC} °C`,
      )
    case 'dewPointC':
      return vapourFromDewPointPa(value)
    case 'windFromDeg':
      return value * DEG
    case 'pressureHpa':
      if (sky.pressureIs === 'station') return value * 100
      return believed(
        stationFromSeaLevelPa(value * 100, place.elevationM, airC),
        LEAST_PRESSURE_PA,
        MOST_PRESSURE_PA,
        cell.field,
        `${value} hPa at sea level under ${place.elevationM} m`,
      )
    default:
      return value
  }
}

/** Damper or thinner air than this is a slip of unit or column. [Pa] Records are near 5 kPa of vapour, 330 and 1085 hPa. */
const MOST_VAPOUR_PA = 12_000
const LEAST_PRESSURE_PA = 30_000
const MOST_PRESSURE_PA = 110_000

/** A pressure worked out from a cell, NaN where it could not be. @throws InputError where no air is like that */
function believed(valuePa: number, leastPa: number, mostPa: number, field: string, given: string): number {
  if (!(valuePa < leastPa || valuePa > mostPa)) return valuePa
  const hPa = (pascal: number) => Math.round(pascal / 100)
  throw new InputError(
    'out-of-range',
    field,
    `${given} given, which makes ${hPa(valuePa)} hPa; expected ${hPa(leastPa)} to ${hPa(mostPa)} hPa`,
  )
}

function intervals(at: Float64Array, convention: 'preceding' | 'following' | 'instant') {
  if (convention === 'instant') return { fromMs: at, toMs: at }
  const last = at.length - 1
  if (convention === 'preceding')
    return { fromMs: at.map((ms, i) => (i > 0 ? at[i - 1] : ms - (at[1] - at[0]))), toMs: at }
  return { fromMs: at, toMs: at.map((ms, i) => (i < last ? at[i + 1] : ms + (at[last] - at[last - 1]))) }
}

function silences(sky: SkyDocument, byMonth: readonly number[] | undefined): string[] {
  const lacks = (...names: SkyColumn[]) => sky.places.some((p) => names.every((name) => p[name] === undefined))
  return [
    ...(lacks('windMps') ? ['The sky brings no wind: still air is assumed.'] : []),
    ...(lacks('pressureHpa') ? ['The sky brings no air pressure: the standard atmosphere is assumed.'] : []),
    ...(lacks('humidityPct', 'dewPointC') ? ['The sky brings no humidity: dry air is assumed.'] : []),
    ...turbidityNotes(sky, lacks('turbidity'), byMonth),
    ...(sky.source === 'typical' ? ['The sky is that of a typical year, not a forecast.'] : []),
  ]
}

function turbidityNotes(sky: SkyDocument, isLacking: boolean, byMonth: readonly number[] | undefined): string[] {
  if (!isLacking || sky.turbidityByMonth !== undefined) return []
  if (byMonth !== undefined) return ['The sky brings no turbidity: the race’s by month is taken.']
  return [`The sky brings no turbidity: Linke ${LINKE_DEFAULT} is assumed.`]
}

/** What the crew is told of rows that the engine could not take as they stood. */
const ROW_NOTES = {
  'light-while-dark': 'brings light while the sun is down; is its UTC offset right?',
  'index-limited': 'brings more light than the sun can and was limited.',
  'beam-over-global': 'brings more beam than global light; the beam was cut.',
} as const

function corrections(sky: SkyDocument, prepared: Sky): string[] {
  return sky.places.flatMap((place, p) =>
    (Object.keys(ROW_NOTES) as (keyof typeof ROW_NOTES)[]).flatMap((what) => {
      const rows = new Set(prepared.notes.filter((n) => n.place === p && n.what === what).map((n) => n.row))
      if (rows.size === 0) return []
      return [`${place.name}: ${rows.size === 1 ? 'one row' : `${rows.size} rows, each`} ${ROW_NOTES[what]}`]
    }),
  )
}

/** The sky may end up to an hour inside a day; its nearest values then hold. */
const HOLDS_MS = 3_600_000

/**
 * Says where a sky's nearest values are held because it does not reach to the ends of a day.
 *
 * @throws InputError when it leaves more than an hour of the day uncovered
 */
export function coverageNotes(sky: Sky, day: DayEnds, zone: string): string[] {
  const { fromMs, toMs } = skyCoverage(sky)
  if (!isCovered(sky, day))
    throw new InputError(
      'sky-too-short',
      'sky.places',
      `the sky covers ${localIso(fromMs, zone)} to ${localIso(toMs, zone)}; expected the day from ${localIso(day.opensMs, zone)} to ${localIso(day.closesMs, zone)}`,
    )
  if (fromMs <= day.opensMs && toMs >= day.closesMs) return []
  return [
    `The sky covers ${localIso(fromMs, zone)} to ${localIso(toMs, zone)}; its nearest values hold for the rest of the day.`,
  ]
}

interface DayEnds {
  opensMs: number
  closesMs: number
}

/** Whether a sky reaches over a day but for the hour that its nearest values hold. */
export function isCovered(sky: Sky, day: DayEnds): boolean {
  const { fromMs, toMs } = skyCoverage(sky)
  return fromMs - day.opensMs <= HOLDS_MS && day.closesMs - toMs <= HOLDS_MS
}
