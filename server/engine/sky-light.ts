import { airAlong, type RoadAir } from './air-along.ts'
import { type ClearSkyAlong, clearSkyAlong } from './clear-sky-along.ts'
import type { SkyPlace } from './sky-place.ts'
import type { Intervals } from './sky-table.ts'
import { type Along, refractionRad, type SunPath, sunAlong, trueSun } from './sun.ts'
import type { Span } from './time-curve.ts'

/** Longest stretch integrated by one Gauss–Legendre rule of four points. [ms] */
const CHUNK_MS = 1_800_000
/** @source Abramowitz & Stegun, table 25.4, n = 4 */
const GAUSS_AT = [-0.861136311594053, -0.339981043584856, 0.339981043584856, 0.861136311594053]
const GAUSS_WEIGHT = [0.347854845137454, 0.652145154862546, 0.652145154862546, 0.347854845137454]
/** Below this mean of the clear sky over a row, the row is dark and its neighbours speak for it. [W/m²] */
const DARK_WM2 = 0.05

/** A row with some sun in it: the stretch between first and last light, and its points of integration. */
interface LitRow {
  row: number
  fromMs: number
  midMs: number
  toMs: number
  first: number
  end: number
  /** Length of the whole row; 1 for an instant. [s] */
  seconds: number
}

/** The clear sky over the lit rows of a table, at points whose weighted sum is the energy. */
export interface LitTable {
  rows: LitRow[]
  atMs: Float64Array
  seconds: Float64Array
  clear: ClearSkyAlong
  /** The clear sky's beam on the level ground at each point. [W/m²] */
  beamWm2: Float64Array
}

/** A place with its air, seen alone, and the sun's path over its table. */
export interface LightSource {
  place: SkyPlace
  linkeDefault: number
  lapseCPerM: number
  path: SunPath
}

/** Clear sky of every row of a table that has sun in it. */
export function litTable(source: LightSource, { fromMs, toMs }: Intervals): LitTable {
  const scanMs = Array.from(fromMs, (from, row) => scan(from, toMs[row]))
  const seen = clearSkyAt(source, scanMs.flat())
  const rows: LitRow[] = []
  const atMs: number[] = []
  const seconds: number[] = []
  let first = 0
  scanMs.forEach((times, row) => {
    const chunks = litChunks(source, seen, times, first)
    first += times.length
    if (chunks.length === 0) return
    const start = chunks[0][0]
    const end = chunks[chunks.length - 1][1]
    const lit = { row, fromMs: start, midMs: (start + end) / 2, toMs: end, first: atMs.length, end: 0, seconds: 1 }
    if (toMs[row] > fromMs[row]) lit.seconds = (toMs[row] - fromMs[row]) / 1000
    for (const chunk of chunks) addPoints(chunk, lit.midMs, atMs, seconds)
    rows.push({ ...lit, end: atMs.length })
  })
  const { clear } = clearSkyAt(source, atMs)
  const beamWm2 = clear.ghiWm2.map((ghi, i) => ghi - clear.dhiWm2[i])
  return { rows, atMs: Float64Array.from(atMs), seconds: Float64Array.from(seconds), clear, beamWm2 }
}

function scan(fromMs: number, toMs: number): number[] {
  const chunks = Math.ceil((toMs - fromMs) / CHUNK_MS)
  if (chunks === 0) return [fromMs]
  return Array.from({ length: chunks + 1 }, (_, i) => (i === chunks ? toMs : fromMs + (i * (toMs - fromMs)) / chunks))
}

function clearSkyAt(source: LightSource, times: number[]): { clear: ClearSkyAlong; air: RoadAir } {
  const { place, linkeDefault, lapseCPerM } = source
  const all = (value: number): Float64Array => new Float64Array(times.length).fill(value)
  const along: Along = {
    count: times.length,
    atMs: Float64Array.from(times),
    latRad: all(place.latRad),
    lonRad: all(place.lonRad),
    altM: all(place.altM),
  }
  const air = airAlong({ places: [place], weights: null, linkeDefault, lapseCPerM }, along)
  return { clear: clearSkyAlong(sunAlong(source.path, along), along, air), air }
}

/** The lit parts between the times of a scan, cut at sunrise and sunset; an instant gives a stretch of no length. */
function litChunks(
  source: LightSource,
  seen: { clear: ClearSkyAlong; air: RoadAir },
  times: number[],
  first: number,
): [number, number][] {
  const isLit = (i: number): boolean => seen.clear.ghiWm2[first + i] > 0
  if (times.length === 1) return isLit(0) ? [[times[0], times[0]]] : []
  const chunks: [number, number][] = []
  for (let i = 0; i + 1 < times.length; i++) {
    if (!isLit(i) && !isLit(i + 1)) continue
    const air = { pressurePa: seen.air.pressurePa[first + i], airC: seen.air.airC[first + i] }
    const crossing = isLit(i) === isLit(i + 1) ? 0 : horizonMs(source.place, air, times[i], times[i + 1], isLit(i))
    chunks.push([isLit(i) ? times[i] : crossing, isLit(i + 1) ? times[i + 1] : crossing])
  }
  return chunks.filter(([from, to]) => to > from)
}

/** When the apparent sun crosses the horizon between two instants, by halving, on the lit side. [ms] */
function horizonMs(
  place: SkyPlace,
  air: { pressurePa: number; airC: number },
  fromMs: number,
  toMs: number,
  startsLit: boolean,
): number {
  let [lit, dark] = startsLit ? [fromMs, toMs] : [toMs, fromMs]
  while (Math.abs(lit - dark) > 50) {
    const middle = (lit + dark) / 2
    const { altitudeRad } = trueSun(middle, place.latRad, place.lonRad)
    if (altitudeRad + refractionRad(altitudeRad, air.pressurePa, air.airC) > 0) lit = middle
    else dark = middle
  }
  return lit
}

/** Points and weights of integration over a stretch, which is split where the middle knot lies in it. */
function addPoints([fromMs, toMs]: [number, number], midMs: number, atMs: number[], seconds: number[]): void {
  if (fromMs === toMs) {
    atMs.push(fromMs)
    seconds.push(1)
    return
  }
  const cuts = midMs > fromMs && midMs < toMs ? [fromMs, midMs, toMs] : [fromMs, toMs]
  for (let c = 0; c + 1 < cuts.length; c++) {
    const half = (cuts[c + 1] - cuts[c]) / 2
    GAUSS_AT.forEach((at, g) => {
      atMs.push(cuts[c] + half * (1 + at))
      seconds.push((half * GAUSS_WEIGHT[g]) / 1000)
    })
  }
}

/** Energy of a quantity over a lit row, all of it or by the row's curve. [J/m²] */
export function energyJm2(table: LitTable, lit: LitRow, perPoint: Float64Array): number {
  let sum = 0
  for (let i = lit.first; i < lit.end; i++) sum += table.seconds[i] * perPoint[i]
  return sum
}

/**
 * The row as a span of index: its mean over the clear quantity's energy in it.
 *
 * @param energy  the row's own energy: its mean times its length. [J/m²]
 * @param clear   the clear sky's quantity at the table's points. [W/m²]
 * @returns null when the row is dark
 */
export function indexSpan(table: LitTable, lit: LitRow, energy: number, clear: Float64Array): Span | null {
  const { fromMs, midMs, toMs } = lit
  const half = toMs > fromMs ? (toMs - fromMs) / 2 : 1
  let startWeight = 0
  let midWeight = 0
  let endWeight = 0
  for (let i = lit.first; i < lit.end; i++) {
    const share = table.seconds[i] * clear[i]
    const away = (table.atMs[i] - midMs) / half
    midWeight += share * (1 - Math.abs(away))
    if (away < 0) startWeight -= share * away
    else endWeight += share * away
  }
  const whole = startWeight + midWeight + endWeight
  if (!(whole > DARK_WM2 * lit.seconds)) return null
  return { fromMs, midMs, toMs, value: energy / whole, startWeight, midWeight, endWeight }
}
