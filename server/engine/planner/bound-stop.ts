import { type Below, emptyBelow, joinLines, type Spacing } from './below.ts'
import { type DayTables, rowAt, type TableStop } from './day-tables.ts'

/** Behind a stop: the function moved by the stop's length, what the stop brings taken off at its price. */
export function behindStop(
  day: DayTables,
  spacing: Spacing,
  from: Below,
  of: { stop: TableStop; price: number; latestS: number },
): Below {
  const path = leaving(day, from, of.stop, of.price)
  const to = emptyBelow(path[0].atS, of.latestS, spacing, from.steepest)
  const cells = to.atS.length - 1
  const climb = new Float64Array(cells)
  const foot = new Float64Array(cells).fill(Number.POSITIVE_INFINITY)
  if (cells === 0) to.value[0] = leastTogether(path)
  for (let c = 0, p = 0; c < cells; c++) {
    const [startS, endS] = [to.atS[c], to.atS[c + 1]]
    while (p + 1 < path.length && path[p + 1].atS < startS) p++
    const inside = [pointAt(path, startS)]
    for (let n = p; n < path.length && path[n].atS <= endS; n++) if (path[n].atS >= startS) inside.push(path[n])
    inside.push(pointAt(path, endS))
    const known = inside.filter((point) => point !== null)
    if (known.length === 0) continue
    const last = known[known.length - 1]
    climb[c] = last.atS > known[0].atS ? (last.value - known[0].value) / (last.atS - known[0].atS) : 0
    for (const point of known) foot[c] = Math.min(foot[c], point.value - climb[c] * point.atS)
  }
  joinLines(to, climb, foot)
  return to
}

interface Point {
  atS: number
  value: number
}

/**
 * Departures in time, with the value behind the stop: straight in between. Behind the last piece no stop is held to
 * cost energy, since the floor is asked on arrival.
 */
function leaving(day: DayTables, { atS, value }: Below, stop: TableStop, price: number): Point[] {
  const { clock, pieces } = day
  const leastJ = stop.beforePiece === pieces ? 0 : Number.NEGATIVE_INFINITY
  let leftS = Number.NEGATIVE_INFINITY
  const point = (s: number, before: number): Point => {
    leftS = Math.max(s + rowAt(stop.lengthS, 0, clock, s), leftS)
    return { atS: leftS, value: before - price * Math.max(rowAt(stop.gainJ, 0, clock, s), leastJ) }
  }
  const path = [point(atS[0], value[0])]
  for (let j = 1; j < atS.length; j++) {
    const endS = Math.min(atS[j], stop.closesS)
    if (endS <= atS[j - 1]) break
    const slope = (value[j] - value[j - 1]) / (atS[j] - atS[j - 1])
    for (let n = Math.max(Math.floor((atS[j - 1] - clock.from) / clock.step) + 1, 0); n < clock.count; n++) {
      const s = clock.from + n * clock.step
      if (s >= endS) break
      path.push(point(s, value[j - 1] + slope * (s - atS[j - 1])))
    }
    path.push(point(endS, value[j - 1] + slope * (endS - atS[j - 1])))
  }
  return path
}

/** The lowest of the points that leave with the first. */
const leastTogether = (path: Point[]): number =>
  path.reduce((least, { atS, value }) => (atS === path[0].atS ? Math.min(least, value) : least), path[0].value)

/** A point of the path at an instant; null beyond its ends. */
function pointAt(path: Point[], atS: number): Point | null {
  let low = 0
  let high = path.length - 1
  if (!(atS >= path[low].atS && atS <= path[high].atS)) return null
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if (path[middle].atS <= atS) low = middle
    else high = middle
  }
  const [a, b] = [path[low], path[high]]
  const share = b.atS > a.atS ? (atS - a.atS) / (b.atS - a.atS) : 0
  return { atS, value: b.atS > a.atS ? a.value + (b.value - a.value) * share : Math.min(a.value, b.value) }
}
