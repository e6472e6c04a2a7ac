import { logPressureRatio, standardAirC } from './air.ts'
import { expNear, nearbySlots, powerNear } from './nearby.ts'
import { blendAlong, type Given, given, type SkyPlace, turned } from './sky-place.ts'
import type { Along } from './sun.ts'
import { curveAlong } from './time-curve.ts'

/** Air at the road's height, step by step. */
export interface RoadAir {
  airC: Float64Array
  pressurePa: Float64Array
  vapourPa: Float64Array
  linke: Float64Array
}

/** What air is made of: places with their curves, their weights at each step, and what holds where none says. */
export interface AirSource {
  places: SkyPlace[]
  weights: Float64Array[] | null
  linkeDefault: number
  /** Change of air temperature with height. [K/m] */
  lapseCPerM: number
}

/**
 * Temperature, pressure, vapour pressure and turbidity at each step, brought from the places' heights to the road's.
 *
 * Temperature by the lapse rate, pressure and vapour pressure by the hypsometric equation (vapour keeps its mixing
 * ratio). Where no place brings a column: standard atmosphere, dry air, the default turbidity.
 */
export function airAlong(source: AirSource, along: Along): RoadAir {
  const { places, weights } = source
  const airC = temperatureAlong(source, along)
  const pressures = given(places, weights, (place) => place.pressurePa)
  const vapours = given(places, weights, (place) => place.vapourPa)
  return {
    airC,
    pressurePa: pressures.length > 0 ? liftedAlong(pressures, source, along, airC) : standardPressureAlong(along),
    vapourPa: vapours.length > 0 ? liftedAlong(vapours, source, along, airC) : new Float64Array(along.count),
    linke:
      blendAlong(
        given(places, weights, (place) => place.linke),
        along,
      ) ?? new Float64Array(along.count).fill(source.linkeDefault),
  }
}

function temperatureAlong({ places, weights, lapseCPerM }: AirSource, along: Along): Float64Array {
  const columns = given(places, weights, (place) => place.airC)
  const airC = blendAlong(columns, along)
  if (airC === null) return along.altM.map(standardAirC)
  const heights = columns.map((column) => column.place.altM)
  for (let i = 0; i < along.count; i++) {
    let placeM = heights[0]
    for (let c = 1; c < columns.length; c++) placeM += (heights[c] - heights[0]) * (columns[c].weight?.[i] ?? 0)
    airC[i] += lapseCPerM * (along.altM[i] - placeM)
  }
  return airC
}

/** A pressure brought from each place's height to the road's and blended; airC is the road's. */
function liftedAlong(columns: Given[], { lapseCPerM }: AirSource, along: Along, airC: Float64Array): Float64Array {
  const sum = new Float64Array(along.count)
  const own = new Float64Array(along.count)
  for (const { place, curve, weight } of columns) {
    const slots = nearbySlots(2)
    curveAlong(curve, along.atMs, own)
    for (let i = 0; i < along.count; i++) {
      const placeC = airC[i] - lapseCPerM * (along.altM[i] - place.altM)
      const lifted = own[i] * expNear(slots, 0, logPressureRatio(place.altM, along.altM[i], placeC, lapseCPerM))
      sum[i] += weight === null ? lifted : weight[i] * lifted
    }
  }
  return sum
}

/** `standardPressurePa` at each step. */
function standardPressureAlong({ count, altM }: Along): Float64Array {
  const pressurePa = new Float64Array(count)
  const slots = nearbySlots(7)
  for (let i = 0; i < count; i++)
    pressurePa[i] = 100 * powerNear(slots, 0, (44331.514 - altM[i]) * (1 / 11880.516), 1 / 0.1902632)
  return pressurePa
}

/** Wind at 10 m at each step; calm where no place brings it, gusts no less than the wind. */
export function windAlong(
  { places, weights }: AirSource,
  along: Along,
): { windMps: Float64Array; windFromRad: Float64Array; gustMps: Float64Array } {
  const blend = (pick: Parameters<typeof given>[2]): Float64Array | null =>
    blendAlong(given(places, weights, pick), along)
  const windMps = blend((place) => place.windMps) ?? new Float64Array(along.count)
  const gustMps = blend((place) => place.gustMps) ?? windMps.slice()
  for (let i = 0; i < along.count; i++) if (gustMps[i] < windMps[i]) gustMps[i] = windMps[i]
  const directions = given(places, weights, (place) => place.windFromRad)
  return { windMps, windFromRad: directionAlong(directions, along), gustMps }
}

/** Directions blended the short way round from the first place's, given in 0..2pi. */
function directionAlong(columns: Given[], along: Along): Float64Array {
  const fromRad = new Float64Array(along.count)
  if (columns.length === 0) return fromRad
  curveAlong(columns[0].curve, along.atMs, fromRad)
  const offset = new Float64Array(along.count)
  const own = new Float64Array(along.count)
  for (const { curve, weight } of columns.slice(1)) {
    curveAlong(curve, along.atMs, own)
    for (let i = 0; i < along.count; i++) offset[i] += (weight?.[i] ?? 0) * turned(own[i] - fromRad[i])
  }
  for (let i = 0; i < along.count; i++) {
    const angle = fromRad[i] + offset[i]
    fromRad[i] = angle - 2 * Math.PI * Math.floor(angle / (2 * Math.PI))
  }
  return fromRad
}
