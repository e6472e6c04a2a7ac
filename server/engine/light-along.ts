import type { ClearSkyAlong } from './clear-sky-along.ts'
import { erbsDiffuseWm2 } from './decompose.ts'
import { addScaled, type Light, type SkyPlace } from './sky-place.ts'
import type { Along } from './sun.ts'
import { curveAlong } from './time-curve.ts'

/**
 * Factors on the clear sky at each step, summed over places by weight: the beam, the diffuse, the part of the clear
 * beam that clouds scatter into the diffuse; and, for places that tell GHI alone, their share and global factor.
 */
interface Factors {
  beam: Float64Array
  diffuse: Float64Array
  scattered: Float64Array
  globalShare: Float64Array
  global: Float64Array
}

/**
 * Turns the clear sky at each step, in place, into the light that the places tell of.
 *
 * GHI is beam and diffuse on the level ground; DNI is held to the irradiance above the air.
 *
 * @param up     sine of the sun's true altitude, for Erbs (count)
 * @param clear  the clear sky along the road; its ghi, dni, dhi are overwritten
 */
export function lightAlong(
  source: { places: SkyPlace[]; weights: Float64Array[] | null },
  along: Along,
  up: Float64Array,
  clear: ClearSkyAlong,
): void {
  if (source.places.every((place) => place.light.kind === 'clear')) return
  const factors = factorsAlong(source, along)
  applySplit(
    factors,
    clear,
    up,
    source.places.some((place) => place.light.kind === 'global'),
  )
}

function factorsAlong(source: { places: SkyPlace[]; weights: Float64Array[] | null }, along: Along): Factors {
  const zeros = (): Float64Array => new Float64Array(along.count)
  const factors = { beam: zeros(), diffuse: zeros(), scattered: zeros(), globalShare: zeros(), global: zeros() }
  const one = zeros()
  const other = zeros()
  source.places.forEach((place, p) =>
    addPlace(factors, place.light, along.atMs, source.weights === null ? null : source.weights[p], one, other),
  )
  return factors
}

function addPlace(
  to: Factors,
  light: Light,
  atMs: Float64Array,
  weight: Float64Array | null,
  one: Float64Array,
  other: Float64Array,
): void {
  if (light.kind === 'global') {
    addScaled(to.global, curveAlong(light.index, atMs, one), weight)
    addScaled(to.globalShare, one.fill(1), weight)
    return
  }
  if (light.kind === 'split') {
    addScaled(to.beam, curveAlong(light.beam, atMs, one), weight)
    addScaled(to.diffuse, curveAlong(light.diffuse, atMs, other), weight)
    return
  }
  if (light.kind === 'clear') {
    addScaled(to.beam, one.fill(1), weight)
    addScaled(to.diffuse, one, weight)
    return
  }
  curveAlong(light.transmission, atMs, one)
  curveAlong(light.scattered, atMs, other)
  addScaled(to.diffuse, one, weight)
  for (let i = 0; i < one.length; i++) other[i] *= one[i]
  addScaled(to.scattered, other, weight)
  for (let i = 0; i < one.length; i++) one[i] -= other[i]
  addScaled(to.beam, one, weight)
}

function applySplit(factors: Factors, clear: ClearSkyAlong, up: Float64Array, hasGlobal: boolean): void {
  const { beam, diffuse, scattered, global, globalShare } = factors
  const { ghiWm2, dniWm2, dhiWm2, extraWm2 } = clear
  for (let i = 0; i < up.length; i++) {
    const clearGhi = ghiWm2[i]
    if (!(clearGhi > 0)) continue
    const clearBeam = clearGhi - dhiWm2[i]
    let dni = beam[i] * dniWm2[i]
    let dhi = diffuse[i] * dhiWm2[i] + scattered[i] * clearBeam
    let ghi = diffuse[i] * clearGhi + (beam[i] - diffuse[i] + scattered[i]) * clearBeam
    if (hasGlobal && globalShare[i] > 0) {
      const ownGhi = (global[i] / globalShare[i]) * clearGhi
      const ownDhi = erbsDiffuseWm2(ownGhi, up[i], extraWm2[i])
      if (ownDhi < ownGhi) dni += (globalShare[i] * (ownGhi - ownDhi)) / up[i]
      dhi += globalShare[i] * ownDhi
      ghi += globalShare[i] * ownGhi
    }
    if (dni > extraWm2[i]) {
      ghi -= (dni - extraWm2[i]) * (dniWm2[i] > 0 ? clearBeam / dniWm2[i] : Math.max(up[i], 0))
      dni = extraWm2[i]
    }
    ghiWm2[i] = ghi
    dniWm2[i] = dni
    dhiWm2[i] = dhi
  }
}
