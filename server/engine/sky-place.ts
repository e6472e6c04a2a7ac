import type { Along } from './sun.ts'
import { type Curve, curveAlong } from './time-curve.ts'

/** How a place tells the light: factors on the clear sky as curves in time. */
export type Light =
  | { kind: 'clear' }
  | { kind: 'split'; beam: Curve; diffuse: Curve }
  | { kind: 'global'; index: Curve }
  | { kind: 'cloud'; transmission: Curve; scattered: Curve }

/** A place of the sky, its columns as curves in time; null where it has no such column. */
export interface SkyPlace {
  latRad: number
  lonRad: number
  altM: number
  airC: Curve | null
  vapourPa: Curve | null
  pressurePa: Curve | null
  linke: Curve | null
  windMps: Curve | null
  /** Unwrapped: may run beyond a full turn. */
  windFromRad: Curve | null
  gustMps: Curve | null
  light: Light
}

/** Distance at which nearness stops growing, so that a place has a finite weight at itself: 1 m. [rad] */
const NEAREST_RAD = 1 / 6_371_000

/**
 * Weight of each place at each step: inverse distance squared, summing to 1; null for a single place.
 *
 * Distance on a plane chart around the step: right for neighbours, good enough in order for far places.
 */
export function placeWeights(places: SkyPlace[], along: Along): Float64Array[] | null {
  if (places.length < 2) return null
  const weights = places.map(() => new Float64Array(along.count))
  for (let i = 0; i < along.count; i++) {
    const shrink = Math.cos(along.latRad[i])
    let sum = 0
    for (let p = 0; p < places.length; p++) {
      const north = places[p].latRad - along.latRad[i]
      const east = turned(places[p].lonRad - along.lonRad[i]) * shrink
      const weight = 1 / (north * north + east * east + NEAREST_RAD * NEAREST_RAD)
      weights[p][i] = weight
      sum += weight
    }
    for (const weight of weights) weight[i] /= sum
  }
  return weights
}

/** The same angle between -pi and pi. [rad] */
export const turned = (angleRad: number): number => angleRad - 2 * Math.PI * Math.round(angleRad / (2 * Math.PI))

/** Places that have a curve, with that curve. */
export interface Given {
  place: SkyPlace
  curve: Curve
  /** Weight among these places at each step; null when this is the only one. */
  weight: Float64Array | null
}

/** The places that bring a column, their weights made to sum to 1 among themselves. */
export function given(
  places: SkyPlace[],
  weights: Float64Array[] | null,
  pick: (place: SkyPlace) => Curve | null,
): Given[] {
  const found = places.flatMap((place, p) => {
    const curve = pick(place)
    return curve === null ? [] : [{ place, curve, weight: weights === null ? null : weights[p] }]
  })
  if (found.length < 2) return found.map((one) => ({ ...one, weight: null }))
  if (found.length === places.length) return found
  return found.map((one) => ({ ...one, weight: sharesOf(one.weight, found) }))
}

function sharesOf(weight: Float64Array | null, among: Given[]): Float64Array | null {
  return (
    weight?.map((own, i) => {
      let sum = 0
      for (const other of among) sum += other.weight?.[i] ?? 0
      return own / sum
    }) ?? null
  )
}

/** The column at each step, blended over the places that bring it; null when none does. */
export function blendAlong(columns: Given[], along: Along): Float64Array | null {
  if (columns.length === 0) return null
  if (columns.length === 1) return curveAlong(columns[0].curve, along.atMs, new Float64Array(along.count))
  const sum = new Float64Array(along.count)
  const own = new Float64Array(along.count)
  for (const column of columns) addScaled(sum, curveAlong(column.curve, along.atMs, own), column.weight)
  return sum
}

/** sum += values × weight; weight null is 1. */
export function addScaled(sum: Float64Array, values: Float64Array, weight: Float64Array | null): void {
  if (weight === null) for (let i = 0; i < sum.length; i++) sum[i] += values[i]
  else for (let i = 0; i < sum.length; i++) sum[i] += values[i] * weight[i]
}
