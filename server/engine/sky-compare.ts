import { prepareSky, type Sky, type SkyColumn, type SkyPlaceInput, weatherAlong } from './sky.ts'
import { rowMeans, rowsOf, type Seen, seenRows, type SkySide } from './sky-common-rows.ts'
import { type ComparedRows, only } from './sky-score.ts'

/** What two skies are compared by. Along and across: the wind by the measured wind's own direction. */
export const SKY_MEASURES = [
  'ghiWm2',
  'dniWm2',
  'dhiWm2',
  'clearSkyIndex',
  'airC',
  'windMps',
  'windAlongMps',
  'windAcrossMps',
  'pressurePa',
] as const
export type SkyMeasure = (typeof SKY_MEASURES)[number]

export interface ComparedPlace {
  measures: Map<SkyMeasure, ComparedRows>
  /** Global irradiance of all rows, dark ones too, for energies. */
  global: ComparedRows
  /** Table columns that one of the two skies lacks, or for which they have no row in common. */
  lacking: ('air' | 'wind' | 'pressure')[]
}

/** Columns that tell of light. */
export const LIGHT_COLUMNS: readonly SkyColumn[] = ['ghiWm2', 'dniWm2', 'dhiWm2', 'cloudFraction']
/** Light is compared where the clear sky brings more than this: common practice, no source. [W/m²] */
const DAYLIGHT_WM2 = 20
/** A wind below this comes from nowhere in particular. [m/s] */
const CALM_MPS = 0.5

/**
 * A forecast blended at a measured place, beside what was measured there, row by row of the measured table.
 *
 * Both are read by the same sky model; a row counts where the measured table has a value and the forecast reaches over
 * it. The clear-sky index of both is by one clear sky: `linkeDefault`, standard atmosphere.
 *
 * @param place  which of the measured places
 */
export function compareAt(forecast: SkySide, measured: SkySide, place: number): ComparedPlace {
  const input = measured.places[place]
  const own: Sky = { ...measured.sky, places: [measured.sky.places[place]] }
  const seen = (columns: readonly SkyColumn[]): Seen | null => seenRows(forecast, own, input, columns)
  const measures: ComparedPlace['measures'] = new Map()
  const lacking: ComparedPlace['lacking'] = []
  const light = seen(LIGHT_COLUMNS)
  if (light !== null) addLight(measures, light, clearRows(forecast.sky.linkeDefault, input, light))
  const air = seen(['airC'])
  if (air === null) lacking.push('air')
  else
    measures.set(
      'airC',
      rowsOf(air, (weather) => weather.airC),
    )
  const wind = seen(['windMps'])
  if (wind === null) lacking.push('wind')
  else addWind(measures, wind)
  const pressure = seen(['pressurePa'])
  if (pressure === null) lacking.push('pressure')
  else
    measures.set(
      'pressurePa',
      rowsOf(pressure, (weather) => weather.pressurePa),
    )
  return { measures, global: light === null ? NO_ROWS : rowsOf(light, (weather) => weather.ghiWm2), lacking }
}

const NONE = new Float64Array(0)
const NO_ROWS: ComparedRows = { fromMs: NONE, toMs: NONE, weightS: NONE, forecast: NONE, measured: NONE }

/** Global irradiance of one clear sky for both, over the same rows. [W/m²] */
function clearRows(linkeDefault: number, { latRad, lonRad, altM }: SkyPlaceInput, seen: Seen): Float64Array {
  const clear = prepareSky({ places: [{ latRad, lonRad, altM, fromMs: NONE, toMs: NONE }], linkeDefault })
  return rowMeans(seen, weatherAlong(clear, seen.path, seen.along).ghiWm2)
}

function addLight(measures: ComparedPlace['measures'], seen: Seen, clearWm2: Float64Array): void {
  const lit = (row: number): boolean => clearWm2[row] > DAYLIGHT_WM2
  const global = rowsOf(seen, (weather) => weather.ghiWm2)
  const over = (values: Float64Array) => values.map((value, row) => value / clearWm2[row])
  measures.set('ghiWm2', only(global, lit))
  measures.set(
    'dniWm2',
    only(
      rowsOf(seen, (weather) => weather.dniWm2),
      lit,
    ),
  )
  measures.set(
    'dhiWm2',
    only(
      rowsOf(seen, (weather) => weather.dhiWm2),
      lit,
    ),
  )
  const index = { ...global, forecast: over(global.forecast), measured: over(global.measured) }
  measures.set('clearSkyIndex', only(index, lit))
}

/** Speed, and the forecast's mean wind along the measured mean wind and across it, clockwise positive. */
function addWind(measures: ComparedPlace['measures'], seen: Seen): void {
  const north = rowsOf(seen, ({ windMps, windFromRad }) => windMps.map((speed, i) => speed * Math.cos(windFromRad[i])))
  const east = rowsOf(seen, ({ windMps, windFromRad }) => windMps.map((speed, i) => speed * Math.sin(windFromRad[i])))
  const size = north.measured.map((value, row) => Math.hypot(value, east.measured[row]))
  const blows = (row: number): boolean => size[row] >= CALM_MPS
  const along = size.map(
    (mps, i) => (north.forecast[i] * north.measured[i] + east.forecast[i] * east.measured[i]) / mps,
  )
  const across = size.map(
    (mps, i) => (east.forecast[i] * north.measured[i] - north.forecast[i] * east.measured[i]) / mps,
  )
  measures.set(
    'windMps',
    rowsOf(seen, (weather) => weather.windMps),
  )
  measures.set('windAlongMps', only({ ...north, forecast: along, measured: size }, blows))
  measures.set('windAcrossMps', only({ ...north, forecast: across, measured: size.map(() => 0) }, blows))
}
