import { type Below, emptyBelow, joinLines, mostBetween, type Spacing } from './below.ts'
import { hollowBetween, type Priced, pricedOf, tangent, tangentAt, timeOfSlope } from './bound-priced.ts'
import { type DayTables, rowAt, storedSlope } from './day-tables.ts'

const FAR = Number.POSITIVE_INFINITY

/** Behind a piece: from every instant before it, at every speed. */
export function behindPiece(
  day: DayTables,
  spacing: Spacing,
  from: Below,
  of: { piece: number; price: number; latestS: number },
): Below {
  const priced = pricedOf(day, of.piece, of.price)
  const lowS = from.atS[0] + priced.shortestS
  const to = emptyBelow(lowS, of.latestS, spacing, Math.min(from.steepest, slopeAtLimit(priced, lowS)))
  const near = { cell: 0, isKnown: false }
  guessTimes(priced, from)
  const nodes = to.atS.map((atS) => leastAt(priced, from, atS, near))
  const cells = to.atS.length - 1
  if (cells === 0) to.value[0] = nodes[0]
  const climb = new Float64Array(cells)
  const foot = new Float64Array(cells)
  for (let c = 0; c < cells; c++) {
    climb[c] = (nodes[c + 1] - nodes[c]) / (to.atS[c + 1] - to.atS[c])
    climb[c] = Number.isFinite(climb[c]) ? Math.max(climb[c], to.steepest) : 0
    foot[c] = footOf(priced, from, to.atS[c], to.atS[c + 1], climb[c])
  }
  joinLines(to, climb, foot)
  return to
}

function slopeAtLimit(priced: Priced, atS: number): number {
  const { day, piece, shortestS } = priced
  tangentAt(priced, shortestS, rowAt(day.harvestW, piece * day.clock.count, day.clock, atS))
  return tangent.slope
}

/** Fills in about which time suits each cell, in the sun half a usual passage later; any tangent holds. */
function guessTimes(priced: Priced, from: Below): void {
  const { day, piece, shortestS } = priced
  const { atS, value } = from
  const row = piece * day.clock.count
  priced.guessS = new Float64Array(Math.max(atS.length - 1, 1))
  for (let c = 0; c < priced.guessS.length; c++) {
    const grows = c + 1 < atS.length ? (value[c + 1] - value[c]) / (atS[c + 1] - atS[c]) : 0
    priced.guessS[c] = timeOfSlope(priced, grows, rowAt(day.harvestW, row, day.clock, atS[c] + shortestS), 0)
  }
}

/** A cell that is left and one that is reached; scratch, filled for each pair. */
const pair = { fromS: 0, untilS: 0, left: 0, grows: 0, startS: 0, endS: 0, wantedS: 0 }
/** A line over the sun half way through the piece, for the pair: never under it. [S, W, W/s] */
const sun = { middleS: 0, halfS: 0, W: 0, slope: 0 }

/** Fills the pair and the sun for the cell that is left. */
function takePair({ day, piece, guessS }: Priced, from: Below, c: number): void {
  const last = from.atS.length - 1
  pair.fromS = from.atS[c]
  pair.untilS = from.atS[Math.min(c + 1, last)]
  pair.left = from.value[c]
  pair.grows = pair.untilS > pair.fromS ? (from.value[c + 1] - pair.left) / (pair.untilS - pair.fromS) : 0
  pair.wantedS = guessS[c]
  lineOver(day, piece * day.clock.count, (pair.fromS + pair.startS) / 2, (pair.untilS + pair.endS) / 2)
}

/** Lays the line through the sun of both instants, lifted over what stands out between them. */
function lineOver({ harvestW, clock }: DayTables, row: number, fromS: number, toS: number): void {
  const fromW = rowAt(harvestW, row, clock, fromS)
  const toW = rowAt(harvestW, row, clock, toS)
  sun.middleS = (fromS + toS) / 2
  sun.halfS = (toS - fromS) / 2
  sun.slope = toS > fromS ? (toW - fromW) / (toS - fromS) : 0
  let out = 0
  for (let k = Math.max(Math.ceil((fromS - clock.from) / clock.step), 0); k < clock.count; k++) {
    const s = clock.from + k * clock.step
    if (s >= toS) break
    out = Math.max(out, harvestW[row + k] - fromW - sun.slope * (s - fromS))
  }
  sun.W = (fromW + toW) / 2 + out
}

/** Most sun half way through the piece, between two sums of entering and leaving it. [W] */
const sunBetween = ({ day, piece }: Priced, firstS: number, lastS: number): number =>
  mostBetween(day, day.harvestW, piece * day.clock.count, firstS / 2, lastS / 2)

/** Last cell from which an instant can be reached at the shortest time. */
function latestCell(from: Below, priced: Priced, atS: number): number {
  const { atS: left } = from
  let low = 0
  let high = Math.max(left.length - 2, 0)
  while (low < high) {
    const middle = (low + high + 1) >> 1
    if (left[middle] <= atS - priced.shortestS) low = middle
    else high = middle - 1
  }
  return low
}

/** Cells around that of the node before in which a node looks for its least. */
const NEAR_CELLS = 2

/**
 * Value at an instant behind the piece, near enough to take slopes from: looked for around the cell that the node
 * before came from.
 */
function leastAt(priced: Priced, from: Below, atS: number, near: { cell: number; isKnown: boolean }): number {
  let least = FAR
  pair.startS = atS
  pair.endS = atS
  const latest = latestCell(from, priced, atS)
  const first = near.isKnown ? Math.max(near.cell - NEAR_CELLS, 0) : 0
  const last = near.isKnown ? Math.min(near.cell + NEAR_CELLS, latest) : latest
  for (let c = last; c >= first; c--) {
    takePair(priced, from, c)
    if (atS - pair.untilS > priced.longestS) break
    const low = Math.max(atS - pair.untilS, priced.shortestS)
    const high = Math.min(atS - pair.fromS, priced.longestS)
    const timeS = Math.min(Math.max(pair.wantedS, low), Math.max(high, low))
    tangentAt(priced, timeS, sun.W + sun.slope * (atS - timeS / 2 - sun.middleS))
    const value = pair.left + pair.grows * (atS - timeS - pair.fromS) + tangent.value
    if (value >= least) continue
    least = value
    near.cell = c
    near.isKnown = true
  }
  return least
}

const NEWTON_STEPS = 2
/** How far from a tangent's time the slope is first looked at. [S] */
const FIRST_AWAY_S = 0.1

/** Value less `climb` times instant at the nodes before a piece: the least up to each, and from each on. */
const least = { before: new Float64Array(0), behind: new Float64Array(0) }

/**
 * What value less `climb` times arrival never falls below in a cell: pair by pair away from the likeliest, until what is
 * left of them on that side cannot be less.
 */
function footOf(priced: Priced, from: Below, startS: number, endS: number, climb: number): number {
  const last = latestCell(from, priced, endS)
  const { atS } = from
  let first = last
  while (first > 0 && startS - atS[first] <= priced.longestS) first--
  const cells = atS.length - 1
  leastNodes(from, climb, first, Math.min(last + 1, cells))
  pair.startS = startS
  pair.endS = endS
  const sunW = sunBetween(priced, atS[first] + startS, atS[Math.min(last + 1, cells)] + endS)
  const climbS = timeOfSlope(priced, climb, sunW, 0)
  let likeliest = last
  while (likeliest > first && atS[likeliest] + climbS > endS) likeliest--
  let foot = FAR
  for (let c = likeliest; c <= last; c++) {
    if (c > likeliest && slower(priced, endS - atS[c], climb, sunW) + least.behind[c] >= foot) break
    foot = Math.min(foot, lowestOf(priced, from, c, climb, climbS, foot))
  }
  for (let c = likeliest - 1; c >= first; c--) {
    if (quicker(priced, startS - atS[c + 1], climb, sunW) + least.before[c + 1] >= foot) break
    foot = Math.min(foot, lowestOf(priced, from, c, climb, climbS, foot))
  }
  return foot
}

function leastNodes({ atS, value }: Below, climb: number, first: number, last: number): void {
  if (least.before.length < atS.length) {
    least.before = new Float64Array(2 * atS.length)
    least.behind = new Float64Array(2 * atS.length)
  }
  let lowest = FAR
  for (let j = first; j <= last; j++) {
    lowest = Math.min(lowest, value[j] - climb * atS[j])
    least.before[j] = lowest
  }
  lowest = FAR
  for (let j = last; j >= first; j--) {
    lowest = Math.min(lowest, value[j] - climb * atS[j])
    least.behind[j] = lowest
  }
}

/** Least of priced energy less `climb` times the piece's time, over times of no more than `mostS`; −Infinity if unknown. */
function slower(priced: Priced, mostS: number, climb: number, sunW: number): number {
  const timeS = Math.min(mostS, priced.longestS)
  if (timeS < priced.shortestS) return FAR
  tangentAt(priced, timeS, sunW)
  if (tangent.slope > climb) return -FAR
  return tangent.value - climb * timeS - hollowBetween(priced, timeS, priced.shortestS, timeS, sunW)
}

/** The same over times of no less than `leastS`. */
function quicker(priced: Priced, leastS: number, climb: number, sunW: number): number {
  const timeS = Math.max(leastS, priced.shortestS)
  if (timeS > priced.longestS) return FAR
  tangentAt(priced, timeS, sunW)
  if (tangent.slope < climb) return -FAR
  return tangent.value - climb * timeS - hollowBetween(priced, timeS, timeS, priced.longestS, sunW)
}

/** Below value less `climb` times arrival over one pair; looked at closely only where it may be less than `foot`. */
function lowestOf(priced: Priced, from: Below, c: number, climb: number, climbS: number, foot: number): number {
  takePair(priced, from, c)
  if (pair.startS - pair.untilS > priced.longestS) return FAR
  const lowest = foot < FAR ? lowestOver(priced, climb, climbS, foot) : -FAR
  if (lowest >= foot) return lowest
  pair.wantedS = timeOfSlope(priced, pair.grows, sun.W, NEWTON_STEPS)
  return Math.max(lowest, lowestOver(priced, climb, timeOfSlope(priced, climb, sun.W, NEWTON_STEPS), foot))
}

/**
 * Below value less `climb` times arrival over a pair of cells, by the tangent of priced energy in the middle sun where
 * the least is expected, and by the line of the sun, at what its watts are worth in that time: linear in the time taken
 * and the instant left, so least at a corner of what the pair allows.
 *
 * @param foot  a value that is not under it need not be exact
 */
function lowestOver(priced: Priced, climb: number, climbS: number, foot: number): number {
  const { fromS, untilS, startS, endS, grows, left, wantedS } = pair
  const least = Math.max(priced.shortestS, startS - untilS)
  const most = Math.min(priced.longestS, endS - fromS)
  if (least > most) return FAR
  const reachS = climb > grows ? Math.min(endS, untilS + climbS) : Math.max(startS, fromS + climbS)
  const leaveS = Math.min(Math.max(reachS - wantedS, fromS), untilS)
  const timeS = Math.min(Math.max(reachS - leaveS, least), most)
  tangentAt(priced, timeS, sun.W)
  const hollow = hollowBetween(priced, timeS, least, most, sun.W)
  const perMiddle = priced.price * sun.slope * tangent.keptS
  const lowest = leastCorner(grows - climb - perMiddle, tangent.slope - climb - perMiddle / 2, least, most)
  const flat = left - grows * fromS + tangent.value - tangent.slope * timeS + perMiddle * sun.middleS
  const value = flat + lowest - hollow
  const coarse = value - sunBeside(priced, timeS, Math.max(most - timeS, timeS - least))
  return coarse >= foot ? coarse : value - sunBeside(priced, timeS, risesWithin(priced, timeS, least, most))
}

/**
 * Most that the line of the sun can be worth beside what the tangent's time makes of it: in times up to so far away it
 * counts for longer or shorter, and other shares of a watt are kept.
 */
function sunBeside({ day, price, mostLoadW, leastLoadW }: Priced, timeS: number, awayS: number): number {
  const mostKept = storedSlope(day.pack, sun.W - mostLoadW)
  const leastKept = storedSlope(day.pack, sun.W - leastLoadW)
  return price * Math.abs(sun.slope) * sun.halfS * (timeS * (mostKept - leastKept) + mostKept * awayS)
}

/**
 * How far from the tangent's time other times count: until the slope has changed by more to both sides than the sun's
 * line is worth in longer or shorter times, and than it can fall again, or until the ends. [S]
 */
function risesWithin(priced: Priced, timeS: number, least: number, most: number): number {
  const { day, price, mostLoadW, fallsW } = priced
  const { slope } = tangent
  const worth = Math.abs(sun.slope) * sun.halfS * storedSlope(day.pack, sun.W - mostLoadW)
  const rise = price * (worth + fallsW * storedSlope(day.pack, Math.min(sun.W, 0) - mostLoadW))
  let awayS = FIRST_AWAY_S
  for (; timeS + awayS < most || timeS - awayS > least; awayS *= 4) {
    let isRisen = true
    if (timeS + awayS < most) {
      tangentAt(priced, timeS + awayS, sun.W)
      isRisen = tangent.slope >= slope + rise
    }
    if (isRisen && timeS - awayS > least) {
      tangentAt(priced, timeS - awayS, sun.W)
      isRisen = tangent.slope <= slope - rise
    }
    if (isRisen) return awayS
  }
  return Math.max(most - timeS, timeS - least)
}

/** Least over what the pair allows of so much per instant left and so much per time taken. */
function leastCorner(perLeaving: number, perTime: number, least: number, most: number): number {
  const first = Math.max(pair.fromS, pair.startS - most)
  const last = Math.min(pair.untilS, pair.endS - least)
  const bend = perTime >= 0 ? pair.startS - least : pair.endS - most
  const lowest = Math.min(
    perLeaving * first + perTime * bestTime(first, perTime, least, most),
    perLeaving * last + perTime * bestTime(last, perTime, least, most),
  )
  if (!(bend > first && bend < last)) return lowest
  return Math.min(lowest, perLeaving * bend + perTime * bestTime(bend, perTime, least, most))
}

/** Shortest time from an instant into the cell that is reached where time costs, longest where it pays. [S] */
const bestTime = (leftS: number, perTime: number, least: number, most: number): number =>
  perTime >= 0 ? Math.max(least, pair.startS - leftS) : Math.min(most, pair.endS - leftS)
