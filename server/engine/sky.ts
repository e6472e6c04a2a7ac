import { airAlong, type RoadAir, windAlong } from './air-along.ts'
import { airDensityKgM3, LAPSE_C_PER_M } from './air.ts'
import { type ClearSkyAlong, clearSkyAlong } from './clear-sky-along.ts'
import { InputError } from './input-error.ts'
import { lightAlong } from './light-along.ts'
import { placeLight, type SkyNote } from './sky-index.ts'
import { placeWeights, type SkyPlace, turned } from './sky-place.ts'
import { checkPlace, intervalsOf, SKY_COLUMNS, type SkyColumn, type SkyPlaceInput } from './sky-table.ts'
import { type Along, type SunDirections, type SunPath, sunAlong, sunPath } from './sun.ts'
import { type Curve, meanPreserving, plainSpans } from './time-curve.ts'

export type { SkyColumn, SkyPlaceInput } from './sky-table.ts'
export type { Along } from './sun.ts'

/** A sky made ready by `prepareSky`. */
export interface Sky {
  places: SkyPlace[]
  linkeDefault: number
  lapseCPerM: number
  fromMs: number
  toMs: number
  /** What is taken to be otherwise than told; nothing where left out. */
  change?: SkyChange
  /** Rows that were not taken as they stood, with the place they belong to. */
  notes: (SkyNote & { place: number })[]
}

/** What may be otherwise than a sky tells. */
export interface SkyChange {
  /** Factor on the sun's light, direct and from the sky. */
  sun: number
  /** Added to the headwind at the car while it drives, wherever it heads. [Mps] */
  headwindMps: number
  /** Added to the air's temperature; nothing where left out. [C] */
  airC?: number
  /** Added to the Linke turbidity; nothing where left out. */
  linke?: number
}

/** Weather at every step of a drive: sun, light, air and wind at the road. Arrays of `count` numbers. */
export interface Weather {
  /** True direction, airless and topocentric. */
  sun: SunDirections
  apparentZenithRad: Float64Array
  extraWm2: Float64Array
  /** Relative; at the horizon's value while the sun is down. */
  airMass: Float64Array
  ghiWm2: Float64Array
  dniWm2: Float64Array
  dhiWm2: Float64Array
  airC: Float64Array
  pressurePa: Float64Array
  vapourPa: Float64Array
  densityKgM3: Float64Array
  windMps: Float64Array
  windFromRad: Float64Array
  gustMps: Float64Array
  /** Added to the headwind at the car; nothing where left out. [Mps] */
  addedHeadwindMps?: Float64Array
}

/**
 * A sky ready to be asked along a road.
 *
 * Every column becomes a curve whose mean over each row is that row's value; irradiance and cloud become factors on
 * the place's own clear sky by the energy of the same row. Rows that are NaN are bridged. Without any irradiance or
 * cloud the sky is clear.
 *
 * @param input.places        at least one
 * @param input.linkeDefault  Linke turbidity where no place brings it, 1..20
 * @param input.lapseCPerM    change of air temperature with height; -0.0065 if not given. [K/m]
 * @throws InputError naming the field, its value and what was expected
 */
export function prepareSky(input: { places: SkyPlaceInput[]; linkeDefault: number; lapseCPerM?: number }): Sky {
  const { linkeDefault, lapseCPerM = LAPSE_C_PER_M } = input
  if (input.places.length === 0) throw new InputError('missing', 'places', 'is empty, expected at least one place')
  if (!(linkeDefault >= 1 && linkeDefault <= 20))
    throw new InputError('out-of-range', 'linkeDefault', `is ${linkeDefault}, expected a number from 1 to 20`)
  if (!(Math.abs(lapseCPerM) <= 0.05))
    throw new InputError('out-of-range', 'lapseCPerM', `is ${lapseCPerM}, expected a number from -0.05 to 0.05`)
  input.places.forEach((place, p) => checkPlace(place, `places[${p}]`))
  const notes: Sky['notes'] = []
  const path = lightPath(input.places)
  const places = input.places.map((place, p) => {
    const prepared = withoutLight(place)
    if (path === null) return prepared
    const own: SkyNote[] = []
    const light = placeLight(place, { place: prepared, linkeDefault, lapseCPerM, path }, `places[${p}]`, own)
    notes.push(...own.map((note) => ({ ...note, place: p })))
    return { ...prepared, light }
  })
  return { places, linkeDefault, lapseCPerM, notes, ...coverage(input.places) }
}

const LIGHT_COLUMNS = ['ghiWm2', 'dniWm2', 'dhiWm2', 'cloudFraction'] as const

/** The sun over all rows that tell of light; null when none does. */
function lightPath(places: SkyPlaceInput[]): SunPath | null {
  let fromMs = Number.POSITIVE_INFINITY
  let toMs = Number.NEGATIVE_INFINITY
  for (const place of places)
    for (const column of LIGHT_COLUMNS) {
      if (place[column] === undefined) continue
      const intervals = intervalsOf(place, column)
      fromMs = Math.min(fromMs, intervals.fromMs[0])
      toMs = Math.max(toMs, intervals.toMs[intervals.toMs.length - 1])
    }
  return fromMs <= toMs ? sunPath(fromMs, toMs) : null
}

function withoutLight(input: SkyPlaceInput): SkyPlace {
  const curve = (column: SkyColumn, low: number, values = input[column]): Curve | null => {
    if (values === undefined) return null
    const { fromMs, toMs } = intervalsOf(input, column)
    return meanPreserving(plainSpans(fromMs, toMs, values), low, Number.POSITIVE_INFINITY)
  }
  return {
    latRad: input.latRad,
    lonRad: input.lonRad,
    altM: input.altM,
    airC: curve('airC', Number.NEGATIVE_INFINITY),
    vapourPa: curve('vapourPa', 0),
    pressurePa: curve('pressurePa', 0),
    linke: curve('linke', 1),
    windMps: curve('windMps', 0),
    windFromRad: curve('windFromRad', Number.NEGATIVE_INFINITY, input.windFromRad && unwrapped(input.windFromRad)),
    gustMps: curve('gustMps', 0),
    light: { kind: 'clear' },
  }
}

/** Directions as one run of angles, each the short way from the one before. */
function unwrapped(fromRad: Float64Array): Float64Array {
  let last = Number.NaN
  return fromRad.map((angle) => {
    const next = Number.isNaN(last) ? angle : last + turned(angle - last)
    if (!Number.isNaN(next)) last = next
    return next
  })
}

function coverage(places: SkyPlaceInput[]): { fromMs: number; toMs: number } {
  let fromMs = Number.NEGATIVE_INFINITY
  let toMs = Number.POSITIVE_INFINITY
  for (const place of places)
    for (const column of SKY_COLUMNS) {
      const values = place[column]
      if (values === undefined) continue
      const intervals = intervalsOf(place, column)
      const rows = [...values.keys()].filter((row) => !Number.isNaN(values[row]))
      fromMs = Math.max(fromMs, intervals.fromMs[rows[0]])
      toMs = Math.min(toMs, intervals.toMs[rows[rows.length - 1]])
    }
  return { fromMs, toMs }
}

/**
 * The time that every column of every place covers; beyond it the sky holds its nearest value. Endless for a sky
 * without a table.
 */
export const skyCoverage = (sky: Sky): { fromMs: number; toMs: number } => ({ fromMs: sky.fromMs, toMs: sky.toMs })

/**
 * Sun, light, air and wind at each step.
 *
 * Several places are blended by inverse distance squared: their factors on the clear sky, not their irradiance;
 * the clear sky is the road's own, at its height and in its air.
 *
 * @param sky    from `prepareSky`
 * @param path   from `sunPath`; must cover every step
 * @param along  steps in any order, fastest when time ascends. [ms, rad, m] (count)
 * @throws InputError when a step lies outside the path
 */
export function weatherAlong(sky: Sky, path: SunPath, along: Along): Weather {
  const source = { ...sky, weights: placeWeights(sky.places, along) }
  const sun = sunAlong(path, along)
  const { change } = sky
  const { linke, ...air } = changedAir(airAlong(source, along), change)
  const clear: ClearSkyAlong = clearSkyAlong(sun, along, { ...air, linke })
  lightAlong(source, along, sun.up, clear)
  if (change !== undefined) dim(clear, change.sun)
  const densityKgM3 = new Float64Array(along.count)
  for (let i = 0; i < along.count; i++) densityKgM3[i] = airDensityKgM3(air.pressurePa[i], air.airC[i], air.vapourPa[i])
  const weather = { sun, ...clear, ...air, densityKgM3, ...windAlong(source, along) }
  if (change === undefined) return weather
  return { ...weather, addedHeadwindMps: new Float64Array(along.count).fill(change.headwindMps) }
}

const LEAST_LINKE = 1

function changedAir(air: RoadAir, change: SkyChange | undefined): RoadAir {
  const { airC = 0, linke = 0 } = change ?? {}
  return {
    ...air,
    airC: airC === 0 ? air.airC : air.airC.map((C) => C + airC),
    linke: linke === 0 ? air.linke : air.linke.map((of) => Math.max(of + linke, LEAST_LINKE)),
  }
}

/** Whether turbidity says how much light there is: all of it comes from a clear sky, or one dimmed by a share of cloud. */
export const isLitByTurbidity = ({ places }: Sky): boolean =>
  places.every(({ light }) => light.kind === 'clear' || light.kind === 'cloud')

/** All light by one factor. */
function dim({ ghiWm2, dniWm2, dhiWm2 }: ClearSkyAlong, factor: number): void {
  for (const column of [ghiWm2, dniWm2, dhiWm2]) for (let i = 0; i < column.length; i++) column[i] *= factor
}
