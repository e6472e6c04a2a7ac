import { getPosition } from 'suncalc'
import { InputError } from './input-error.ts'
import { nearbySlots, turnNear } from './nearby.ts'

const RAD = Math.PI / 180
const DAY_MS = 86_400_000
/** Horizontal parallax of the sun, 8.794" at one astronomical unit; its change over the year is below 0.15". [rad] */
const PARALLAX_RAD = (8.794 / 3600) * RAD
/** Where SPA ends refraction: sun's radius 0.26667 deg and refraction at the horizon 0.5667 deg. [deg] */
const REFRACTION_ENDS_DEG = -0.83337
/** Longest distance between two knots of a sun path. [ms] */
const KNOT_MS = 512_000
const SOLAR_CONSTANT_WM2 = 1366.1

/** Where a car or a place is, step by step. Arrays of `count` numbers. */
export interface Along {
  count: number
  atMs: Float64Array
  latRad: Float64Array
  lonRad: Float64Array
  altM: Float64Array
}

/** True direction towards the sun: unit vectors in the local frame east, north, up. */
export interface SunDirections {
  east: Float64Array
  north: Float64Array
  up: Float64Array
}

/** The sun's earth-fixed direction over a span of time: per block twelve cubic coefficients (x, y, z). */
export interface SunPath {
  fromMs: number
  toMs: number
  blockMs: number
  cubics: Float64Array
}

/** Takes suncalc's own refraction (Meeus 16.4, standard air) out of its altitude; fixed point, 0.15 a round at worst. */
function unrefractedRad(apparentRad: number): number {
  const lifted = (h: number): number => 0.0002967 / Math.tan(h + 0.00312536 / (h + 0.08901179))
  if (apparentRad <= lifted(0)) return apparentRad - lifted(0)
  let h = apparentRad
  for (let round = 0; round < 15; round++) {
    const next = Math.max(apparentRad - lifted(h), 0)
    if (Math.abs(next - h) < 1e-13) return next
    h = next
  }
  return h
}

/**
 * The sun's true (airless, topocentric) altitude and azimuth.
 *
 * Meeus' series as suncalc evaluates them, its refraction taken out again, solar parallax added. Years 1920..2050.
 *
 * @param atMs    instant. [ms since 1970 UTC]
 * @param latRad  geodetic latitude. [rad]
 * @param lonRad  longitude, east positive. [rad]
 * @returns altitudeRad, azimuthRad clockwise from true north 0..2pi
 * @throws InputError for an argument that is no finite number
 * @source Meeus 1998, Astronomical Algorithms 2nd ed., ch. 25 and 40, by way of suncalc 2.0.2
 */
export function trueSun(atMs: number, latRad: number, lonRad: number): { altitudeRad: number; azimuthRad: number } {
  for (const [field, value] of Object.entries({ atMs, latRad, lonRad }))
    if (!Number.isFinite(value)) throw new InputError('not-a-number', field, `is ${value}, expected a finite number`)
  const seen = getPosition(atMs, latRad / RAD, lonRad / RAD)
  const geocentricRad = unrefractedRad(seen.altitude * RAD)
  return { altitudeRad: geocentricRad - PARALLAX_RAD * Math.cos(geocentricRad), azimuthRad: seen.azimuth * RAD }
}

/**
 * How much the air lifts the sun.
 *
 * Saemundsson's formula with local air as SPA applies it; none once the whole sun is below the refracted horizon.
 *
 * @param trueAltitudeRad  altitude without air. [rad]
 * @param pressurePa       at the observer. [Pa]
 * @param airC             at the observer. [°C]
 * @source Reda & Andreas 2008, NREL/TP-560-34302, eq. 42; Saemundsson 1986, Sky & Telescope 72, 70
 */
export function refractionRad(trueAltitudeRad: number, pressurePa: number, airC: number): number {
  const deg = trueAltitudeRad / RAD
  if (deg < REFRACTION_ENDS_DEG) return 0
  return (refractionScale(pressurePa, airC) * (1.02 / 60) * RAD) / Math.tan((deg + 10.3 / (deg + 5.11)) * RAD)
}

/** Local air's refraction over that of Saemundsson's air (1010 hPa, 10 °C). */
export const refractionScale = (pressurePa: number, airC: number): number =>
  (pressurePa * (283 / 101_000)) / (273 + airC)

/**
 * The sun's direction in the earth's frame, ready for `sunAlong`.
 *
 * Cubics through knots at most 512 s apart (Lagrange over four knots); within 1e-7 rad of `trueSun` everywhere.
 *
 * @param fromMs  first instant that may be asked for. [ms since 1970 UTC]
 * @param toMs    last instant, not before fromMs. [ms since 1970 UTC]
 * @throws InputError when the span is no span
 */
export function sunPath(fromMs: number, toMs: number): SunPath {
  if (!(Number.isFinite(fromMs) && Number.isFinite(toMs) && toMs >= fromMs))
    throw new InputError('out-of-range', 'toMs', `is ${toMs}, expected an instant not before ${fromMs}`)
  const blocks = Math.max(1, Math.ceil((toMs - fromMs) / KNOT_MS))
  const blockMs = Math.max(1, (toMs - fromMs) / blocks)
  const knots = new Float64Array((blocks + 3) * 3)
  for (let k = 0; k < blocks + 3; k++) knots.set(earthFixedSun(fromMs + (k - 1) * blockMs), k * 3)
  const cubics = new Float64Array(blocks * 12)
  for (let block = 0; block < blocks; block++)
    for (let axis = 0; axis < 3; axis++) setCubic(cubics, block * 12 + axis * 4, knots, block * 3 + axis)
  return { fromMs, toMs, blockMs, cubics }
}

/** Towards latitude 0 longitude 0, towards longitude 90 east, towards the north pole: suncalc's answer at 0, 0. */
function earthFixedSun(atMs: number): [number, number, number] {
  const seen = getPosition(atMs, 0, 0)
  const altitude = unrefractedRad(seen.altitude * RAD)
  const flat = Math.cos(altitude)
  return [Math.sin(altitude), flat * Math.sin(seen.azimuth * RAD), flat * Math.cos(seen.azimuth * RAD)]
}

function setCubic(cubics: Float64Array, to: number, knots: Float64Array, from: number): void {
  const before = knots[from]
  const start = knots[from + 3]
  const end = knots[from + 6]
  const after = knots[from + 9]
  cubics[to] = start
  cubics[to + 1] = -before / 3 - start / 2 + end - after / 6
  cubics[to + 2] = (before + end) / 2 - start
  cubics[to + 3] = (after - before) / 6 + (start - end) / 2
}

/**
 * True direction towards the sun at each step: airless, topocentric; below the horizon as well.
 *
 * @param path   from `sunPath`; must cover every step
 * @param along  places and instants in any order
 * @returns unit vectors in the local frame (count)
 * @throws InputError when a step lies outside the path
 */
export function sunAlong(path: SunPath, along: Along): SunDirections {
  const { count, atMs, latRad, lonRad } = along
  const { fromMs, toMs, cubics: c } = path
  const blocks = c.length / 12
  const sun = { east: new Float64Array(count), north: new Float64Array(count), up: new Float64Array(count) }
  const { east, north, up } = sun
  const slots = nearbySlots(10)
  for (let i = 0; i < count; i++) {
    if (!(atMs[i] >= fromMs && atMs[i] <= toMs)) throw outsidePath(path, atMs[i], i)
    const place = (atMs[i] - fromMs) / path.blockMs
    const block = Math.min(Math.floor(place), blocks - 1)
    const u = place - block
    const k = block * 12
    const x = c[k] + u * (c[k + 1] + u * (c[k + 2] + u * c[k + 3]))
    const y = c[k + 4] + u * (c[k + 5] + u * (c[k + 6] + u * c[k + 7]))
    const z = c[k + 8] + u * (c[k + 9] + u * (c[k + 10] + u * c[k + 11]))
    turnNear(slots, 0, latRad[i])
    turnNear(slots, 5, lonRad[i])
    const outward = slots[9] * x + slots[8] * y
    const geocentricUp = slots[4] * outward + slots[3] * z
    const toUnit = (1.5 - 0.5 * (x * x + y * y + z * z)) * (1 + PARALLAX_RAD * geocentricUp)
    east[i] = (slots[9] * y - slots[8] * x) * toUnit
    north[i] = (slots[4] * z - slots[3] * outward) * toUnit
    up[i] = (geocentricUp - PARALLAX_RAD) * toUnit
  }
  return sun
}

const outsidePath = (path: SunPath, atMs: number, step: number): InputError =>
  new InputError(
    'out-of-range',
    `along.atMs[${step}]`,
    `is ${atMs}, the sun's path covers ${path.fromMs}..${path.toMs}`,
  )

/**
 * Irradiance on a plane facing the sun above the air, for the UTC day of the instant.
 *
 * @param atMs  instant. [ms since 1970 UTC]
 * @source Spencer 1971, Search 2(5), 172, solar constant 1366.1 W/m²
 */
export function extraterrestrialWm2(atMs: number): number {
  const day = Math.floor(atMs / DAY_MS)
  const angle = (2 * Math.PI * dayOfYear(day)) / 365
  const wave = 0.034221 * Math.cos(angle) + 0.00128 * Math.sin(angle)
  return SOLAR_CONSTANT_WM2 * (1.00011 + wave + 0.000719 * Math.cos(2 * angle) + 0.000077 * Math.sin(2 * angle))
}

/** Days since 1 January of the same year, 0..365, of a day counted from 1970-01-01. */
function dayOfYear(day: number): number {
  const firstOf = (year: number): number => (year - 1970) * 365 + leapsBefore(year) - leapsBefore(1970)
  const guess = 1970 + Math.floor(day / 365.2425)
  const year = day < firstOf(guess) ? guess - 1 : day >= firstOf(guess + 1) ? guess + 1 : guess
  return day - firstOf(year)
}

const leapsBefore = (year: number): number =>
  Math.floor((year - 1) / 4) - Math.floor((year - 1) / 100) + Math.floor((year - 1) / 400)
