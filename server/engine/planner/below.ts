import { type DayTables, rowAt, storedW, WAIT_PART_S } from './day-tables.ts'

/**
 * A function of time at one edge, from below: straight between its nodes, which stand from the earliest instant at which
 * the edge can be passed to the latest.
 */
export interface Below {
  atS: Float64Array
  value: Float64Array
  /** Steepest fall of any piece so far at its limit: lines are not laid steeper. */
  steepest: number
}

/** How wide cells are around an instant, and how wide they grow away from it. [S] */
export interface Spacing {
  /** NaN where all are of the widest. */
  nearS: number
  stepS: number
  widestS: number
}

/** A cell is no wider than this share of its distance, or than the narrowest. */
const WIDENS = 0.1

/** A function that is known nowhere yet. Nodes that move along with a drive lose little near it. */
export function emptyBelow(lowS: number, highS: number, spacing: Spacing, steepest = 0): Below {
  const nodes = highS > lowS ? [lowS, ...between(lowS, highS, spacing), highS] : [lowS]
  const value = new Float64Array(nodes.length).fill(Number.POSITIVE_INFINITY)
  return { atS: Float64Array.from(nodes), value, steepest }
}

/** Nodes between the ends, none nearer to them than half the narrowest cell. [S] */
function between(lowS: number, highS: number, { nearS, stepS, widestS }: Spacing): number[] {
  const isEven = Number.isNaN(nearS)
  const narrowS = isEven ? widestS : stepS
  const from = isEven ? lowS : nearS
  const spareS = narrowS / 2
  const nodes: number[] = []
  const add = (s: number): void => {
    if (s > lowS + spareS && s < highS - spareS) nodes.push(s)
  }
  const offsets: number[] = []
  const mostS = Math.max(highS - from, from - lowS)
  for (let s = narrowS; s < mostS; s += Math.min(Math.max(narrowS, WIDENS * s), widestS)) offsets.push(s)
  for (let j = offsets.length - 1; j >= 0; j--) add(from - offsets[j])
  add(from)
  for (const offset of offsets) add(from + offset)
  return nodes
}

/**
 * Node values from lines below the function, one a cell: the lower of two neighbours at their common node, so that
 * straight lines between the nodes stay below both.
 *
 * @param climb  slope of each cell's line (nodes − 1)
 * @param foot   its value at time 0 (nodes − 1)
 */
export function joinLines(below: Below, climb: Float64Array, foot: Float64Array): void {
  const { atS, value } = below
  for (let c = 0; c < climb.length; c++) {
    const left = climb[c] * atS[c] + foot[c]
    const right = climb[c] * atS[c + 1] + foot[c]
    if (left < value[c]) value[c] = left
    if (right < value[c + 1]) value[c + 1] = right
  }
}

/** Most that a row reaches between two instants. */
export function mostBetween(day: DayTables, row: Float64Array, first: number, fromS: number, toS: number): number {
  const { clock } = day
  let most = Math.max(rowAt(row, first, clock, fromS), rowAt(row, first, clock, toS))
  const node = Math.max(Math.ceil((fromS - clock.from) / clock.step), 0)
  for (let k = node; k < clock.count && clock.from + k * clock.step < toS; k++)
    if (row[first + k] > most) most = row[first + k]
  return most
}

/**
 * Lets the car wait at an edge, in the best sun of the minutes around: the lower of two lines in each cell. At the end
 * no wait is held to cost energy, since the floor is asked on arrival.
 */
export function waiting(day: DayTables, below: Below, edge: number, price: number): void {
  const { atS, value } = below
  const row = Math.min(edge, day.pieces - 1) * day.clock.count
  const leastW = edge === day.pieces ? 0 : Number.NEGATIVE_INFINITY
  for (let j = 1; j < atS.length; j++) {
    const sunW = mostBetween(day, day.harvestW, row, atS[j - 1] - WAIT_PART_S, atS[j] + WAIT_PART_S)
    const gainedW = Math.max(storedW(day.pack, sunW - day.waitingLoadW), leastW)
    const waited = value[j - 1] - price * gainedW * (atS[j] - atS[j - 1])
    if (waited < value[j]) value[j] = waited
  }
}

/**
 * Least of arrival, value and what the evening leaves wanting, over all ends: at every node, every step of the clock,
 * and where the floor takes over from the target.
 */
export function leastAtEnd(day: DayTables, { atS, value }: Below, price: number): number {
  const { clock, duskGainJ, targetJ, floorJ, pieces } = day
  const wantJ = (s: number): number => targetJ - rowAt(duskGainJ, 0, clock, s)
  const floor = floorJ[pieces]
  const total = (s: number, before: number): number => s + before + price * Math.max(wantJ(s), floor)
  let least = total(atS[0], value[0])
  for (let j = 1; j < atS.length; j++) {
    const slope = (value[j] - value[j - 1]) / (atS[j] - atS[j - 1])
    let fromS = atS[j - 1]
    while (fromS < atS[j]) {
      const node = clock.from + (Math.floor((fromS - clock.from) / clock.step + 1e-9) + 1) * clock.step
      const toS = Math.min(node, atS[j])
      const [from, to] = [wantJ(fromS) - floor, wantJ(toS) - floor]
      const bendS = from * to < 0 ? fromS + ((toS - fromS) * from) / (from - to) : toS
      for (const s of [bendS, toS]) least = Math.min(least, total(s, value[j - 1] + slope * (s - atS[j - 1])))
      fromS = toS
    }
  }
  return least
}
