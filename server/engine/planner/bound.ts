import { type Below, emptyBelow, leastAtEnd, type Spacing, waiting } from './below.ts'
import { behindPiece } from './bound-piece.ts'
import { behindStop } from './bound-stop.ts'
import { type DayTables, pieceS } from './day-tables.ts'

/**
 * A proven lower limit on the arrival, from prices of energy along the road.
 *
 * Energy is given a price at each edge in place of floor, ceiling and target. What is left to choose is times alone:
 * arrival plus priced energy is a shortest path over place and time, and its least value, with what the prices
 * themselves are worth, is not above the arrival of any drive that holds. It is carried from below as straight lines
 * on cells of time: a tangent for each pair of cells, then the chord of the least of them. Any prices of at least 0
 * give a valid limit; those of a finished drive give a tight one. The engine's README has the proof.
 *
 * @param sPerJ   price of energy on leaving each edge. [s/J] (pieces + 1)
 * @param latestS arrival of a drive that holds; only drives up to there are looked at. [S]
 * @param stepS   width of a cell. [S]
 * @param alongS  when a drive leaves each edge: cells are so narrow at the end of it only, narrower before and wider away
 *                from it; left out, all are even. [S] (pieces + 1)
 * @returns earliest arrival that cannot be excluded, not above `latestS`. [S]
 */
export function earliestPossible(
  day: DayTables,
  sPerJ: Float64Array,
  latestS: number,
  stepS: number,
  alongS?: Float64Array,
): number {
  const { pieces, stops } = day
  if (pieces === 0) return Math.min(day.start.atS, latestS)
  const ceilingJ = day.pack.ceilingJ + mostMotionJ(day)
  const price = pricesOf(day, sPerJ)
  const shortest = day.fastestMps.map((v, i) => pieceS(day, i, v))
  const stopS = stops.map((stop) => stop.lengthS.reduce((least, s) => Math.min(least, s), Number.POSITIVE_INFINITY))
  let leftS = shortest.reduce((sum, s) => sum + s, 0) + stopS.reduce((sum, s) => sum + s, 0)
  const spacing = (edge: number): Spacing => spacingAt(edge, pieces, stepS, alongS)
  let below: Below = emptyBelow(day.start.atS, latestS - leftS, spacing(0))
  below.value[0] = 0
  let worthS = -price[0] * day.start.energyJ
  for (let i = 0, s = 0; ; i++) {
    for (; s < stops.length && stops[s].beforePiece === i; s++) {
      leftS -= stopS[s]
      below = behindStop(day, spacing(i), below, { stop: stops[s], price: price[i], latestS: latestS - leftS })
    }
    waiting(day, below, i, price[i])
    if (i === pieces) break
    leftS -= shortest[i]
    worthS += price[i] * day.extraJ[i]
    below = behindPiece(day, spacing(i + 1), below, { piece: i, price: price[i], latestS: latestS - leftS })
    const drop = price[i] - price[i + 1]
    if (i + 1 < pieces) worthS += drop * (drop > 0 ? day.floorJ[i + 1] : ceilingJ)
  }
  return Math.min(worthS + leastAtEnd(day, below, price[pieces]), latestS)
}

/**
 * Cells at an edge: what straight lines lose grows with their width squared and falls with the way behind, so they are
 * narrow at first; away from the drive they grow to the full width.
 */
function spacingAt(edge: number, pieces: number, stepS: number, alongS?: Float64Array): Spacing {
  const narrowS = stepS * Math.sqrt(Math.max(edge, 1) / pieces)
  if (alongS === undefined) return { nearS: Number.NaN, stepS: narrowS, widestS: narrowS }
  return { nearS: alongS[edge], stepS: narrowS, widestS: stepS }
}

/**
 * Most that the motion of the car is worth: counted with the pack, so that changes of speed may be left out. What a
 * change costs is convex in the motion gained, so never under its tangent at no change, half way between gains and
 * losses.
 */
function mostMotionJ({ kinetic, fastestMps }: DayTables): number {
  const fastest = fastestMps.reduce((most, v) => Math.max(most, v), 0)
  return ((kinetic.perGained + kinetic.perLost) / 2) * 0.5 * kinetic.massKg * fastest * fastest
}

/** Prices of at least 0, the last one twice: nothing is bought behind the last piece but the evening. */
function pricesOf({ pieces }: DayTables, sPerJ: Float64Array): Float64Array {
  const price = sPerJ.map((s) => (s > 0 ? s : 0))
  price[pieces] = price[pieces - 1]
  return price
}
