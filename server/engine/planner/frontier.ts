import { firstAbove } from './crossing.ts'
import { type DayTables, type Load, loadAt, pieceMps, pieceS, rowAt, storedW } from './day-tables.ts'

/** Most energy at every place and time, and the earliest that each place can be reached. */
export interface Frontier {
  /** First instant and step of the time bins. [S] */
  fromS: number
  stepS: number
  bins: number
  /** Layer 0 is the start; each stop and each piece leads to the next. */
  legs: Leg[]
  /** Most energy in each bin; −Infinity where the place cannot be reached by then. [J] (layers × bins) */
  mostJ: Float64Array
  /** The exact earliest instant of each layer and the energy then. (layers) */
  knotS: Float64Array
  knotJ: Float64Array
  /** Last bin of each layer from which the end can be reached in time. (layers) */
  lastBin: Int32Array
}

/** What leads from one layer to the next: a piece of road, or a stop. */
export interface Leg {
  piece: number
  /** Index of the stop; −1 on the road. */
  stop: number
}

const NEVER = Number.NEGATIVE_INFINITY
const BISECTIONS = 40

/** Speeds tried on a piece: even steps from the slowest up, and the fastest itself. [Mps] */
export function triedSpeeds(day: DayTables, piece: number, stepMps: number): number[] {
  const fastest = day.fastestMps[piece]
  const slowest = Math.min(day.slowestMps, fastest)
  const count = Math.max(Math.ceil((fastest - slowest) / stepMps - 1e-9), 0)
  return [...Array.from({ length: count }, (_, j) => slowest + j * stepMps), fastest]
}

/**
 * The frontier of a day: the most energy with which each place can be reached at each time.
 *
 * Forward over places. From bin to bin by a family of speeds, energies between bins by a cubic held between its
 * neighbours; the fast edge is carried exactly as a knot; waiting is allowed everywhere. Neither a value beyond the
 * edge nor one that touches an unreachable bin is ever used, so that no energy is made up.
 *
 * @param stepS    width of a bin; divides the clock's step and the lengths of the stops. [S]
 * @param stepMps  step of the speeds. [Mps]
 * @param untilS   ends after this are of no interest. [S]
 */
export function frontier(day: DayTables, stepS: number, stepMps: number, untilS = day.latestS): Frontier {
  const legs = legsOf(day)
  const bins = Math.floor((day.latestS - day.start.atS) / stepS + 1e-9) + 1
  const layers = legs.length + 1
  const found: Frontier = {
    fromS: day.start.atS,
    stepS,
    bins,
    legs,
    mostJ: new Float64Array(layers * bins).fill(NEVER),
    knotS: new Float64Array(layers).fill(Number.POSITIVE_INFINITY),
    knotJ: new Float64Array(layers).fill(NEVER),
    lastBin: lastBins(day, legs, { fromS: day.start.atS, stepS, bins, untilS }),
  }
  found.knotS[0] = day.start.atS
  found.knotJ[0] = day.start.energyJ
  found.mostJ[0] = day.start.energyJ
  waitInLayer(day, found, 0)
  for (let layer = 0; layer < legs.length; layer++) {
    if (!(found.knotS[layer] < Number.POSITIVE_INFINITY)) break
    if (legs[layer].stop >= 0) throughStop(day, found, layer)
    else alongPiece(day, found, layer, stepMps)
    waitInLayer(day, found, layer + 1)
  }
  return found
}

function legsOf(day: DayTables): Leg[] {
  const legs: Leg[] = []
  for (let piece = 0; piece <= day.pieces; piece++) {
    day.stops.forEach((stop, s) => {
      if (stop.beforePiece === piece) legs.push({ piece, stop: s })
    })
    if (piece < day.pieces) legs.push({ piece, stop: -1 })
  }
  return legs
}

/** Later bins lead to ends later than wanted. */
function lastBins(
  day: DayTables,
  legs: Leg[],
  of: { fromS: number; stepS: number; bins: number; untilS: number },
): Int32Array {
  const last = new Int32Array(legs.length + 1)
  let latestS = of.untilS
  for (let layer = legs.length; layer >= 0; layer--) {
    last[layer] = Math.min(Math.ceil((latestS - of.fromS) / of.stepS) + SPARE_BINS, of.bins - 1)
    if (layer === 0) break
    const { piece, stop } = legs[layer - 1]
    latestS -= stop >= 0 ? leastOf(day.stops[stop].lengthS) : pieceS(day, piece, day.fastestMps[piece])
  }
  return last
}

/** Bins beyond the last that cubics may touch. */
const SPARE_BINS = 3
const leastOf = (row: Float64Array): number => row.reduce((least, value) => Math.min(least, value), Infinity)

/** Piece whose sun a car waiting in a layer has. */
const waitingPiece = (day: DayTables, { legs }: Frontier, layer: number): number =>
  Math.min(layer < legs.length ? legs[layer].piece : day.pieces - 1, day.pieces - 1)

/** Edge that a layer stands at. */
const edgeOf = (day: DayTables, { legs }: Frontier, layer: number): number =>
  layer < legs.length ? legs[layer].piece : day.pieces

/** Energy while waiting from one instant to another. [J] */
function waitedJ(day: DayTables, piece: number, fromS: number, toS: number): number {
  const sunW = rowAt(day.harvestW, piece * day.clock.count, day.clock, (fromS + toS) / 2)
  return storedW(day.pack, sunW - day.waitingLoadW) * (toS - fromS)
}

/** Lets every bin be reached by waiting in the one before; from the knot first. */
function waitInLayer(day: DayTables, found: Frontier, layer: number): void {
  const { fromS, stepS, bins, mostJ, knotS, knotJ } = found
  const { ceilingJ } = day.pack
  const floorJ = day.floorJ[edgeOf(day, found, layer)]
  const piece = waitingPiece(day, found, layer)
  let atS = knotS[layer]
  let J = knotJ[layer]
  for (let k = Math.max(Math.ceil((atS - fromS) / stepS - 1e-9), 0); k <= found.lastBin[layer]; k++) {
    const t = fromS + k * stepS
    const heldJ = Math.min(ceilingJ, J + waitedJ(day, piece, atS, t))
    const at = layer * bins + k
    if (heldJ > mostJ[at] && heldJ >= floorJ) mostJ[at] = heldJ
    atS = t
    J = mostJ[at]
    if (J === NEVER) return
  }
}

function throughStop(day: DayTables, found: Frontier, layer: number): void {
  const { fromS, stepS, bins, mostJ, knotS, knotJ, legs } = found
  const stop = day.stops[legs[layer].stop]
  const leave = (atS: number): number => atS + rowAt(stop.lengthS, 0, day.clock, atS)
  const gained = (J: number, atS: number): number =>
    Math.min(day.pack.ceilingJ, J + rowAt(stop.gainJ, 0, day.clock, atS))
  if (knotS[layer] > stop.closesS) return
  knotS[layer + 1] = leave(knotS[layer])
  knotJ[layer + 1] = gained(knotJ[layer], knotS[layer])
  for (let k = 0; k <= found.lastBin[layer + 1]; k++) {
    const arrivalS = arrivalFor(leave, fromS + k * stepS, knotS[layer])
    if (!(arrivalS <= stop.closesS)) continue
    const J = energyAt(found, layer, arrivalS)
    if (J > NEVER) mostJ[(layer + 1) * bins + k] = gained(J, arrivalS)
  }
}

/** Latest arrival not before the knot with which a stop is left at an instant; NaN where there is none. [S] */
function arrivalFor(leave: (atS: number) => number, leaveS: number, knotS: number): number {
  if (leave(knotS) > leaveS + 1e-6) return Number.NaN
  let low = knotS
  let high = leaveS
  for (let i = 0; i < BISECTIONS && high - low > 1e-6; i++) {
    const middle = (low + high) / 2
    if (leave(middle) <= leaveS) low = middle
    else high = middle
  }
  return low
}

/**
 * Most energy of a layer at an instant: cubic where four bins are reachable, straight where two are, and along the
 * line from the knot to the first bin. [J]
 */
export function energyAt(found: Frontier, layer: number, atS: number): number {
  const { fromS, stepS, bins, mostJ, knotS, knotJ } = found
  const edgeS = knotS[layer]
  if (!(atS >= edgeS - 1e-6)) return NEVER
  const x = (atS - fromS) / stepS
  const j = Math.floor(x)
  const u = x - j
  const at = layer * bins + j
  if (j >= bins - 1) return j === bins - 1 && u < 1e-9 ? mostJ[at] : NEVER
  const b = j >= 0 ? mostJ[at] : NEVER
  const c = mostJ[at + 1]
  if (b === NEVER || fromS + j * stepS < edgeS) return fromKnot(edgeS, knotJ[layer], fromS + (j + 1) * stepS, c, atS)
  if (c === NEVER) return u < 1e-9 ? b : NEVER
  const a = j > 0 && fromS + (j - 1) * stepS >= edgeS ? mostJ[at - 1] : NEVER
  const d = j + 2 < bins ? mostJ[at + 2] : NEVER
  return a === NEVER || d === NEVER ? b + (c - b) * u : betweenFour(a, b, c, d, u)
}

function fromKnot(edgeS: number, edgeJ: number, binS: number, binJ: number, atS: number): number {
  if (atS <= edgeS) return edgeJ
  if (binJ === NEVER) return NEVER
  return edgeJ + ((binJ - edgeJ) * (atS - edgeS)) / (binS - edgeS)
}

/** Cubic through four even values, held between the middle two. */
function betweenFour(a: number, b: number, c: number, d: number, u: number): number {
  const value = b + u * (c - a / 3 - b / 2 - d / 6 + u * ((a + c) / 2 - b + u * ((b - c) / 2 + (d - a) / 6)))
  return b < c ? Math.min(Math.max(value, b), c) : Math.min(Math.max(value, c), b)
}

function alongPiece(day: DayTables, found: Frontier, layer: number, stepMps: number): void {
  const { fromS, stepS, bins, mostJ, legs } = found
  const { piece } = legs[layer]
  const { ceilingJ } = day.pack
  const floorJ = day.floorJ[piece + 1]
  const sunW = new Float64Array(bins)
  for (let k = 0; k < bins; k++) sunW[k] = rowAt(day.harvestW, piece * day.clock.count, day.clock, fromS + k * stepS)
  const load: Load = { W: 0, slope: 0 }
  for (const speedMps of triedSpeeds(day, piece, stepMps)) {
    const durationS = pieceS(day, piece, speedMps)
    shiftedBy(day, found, layer, {
      durationS,
      loadW: loadAt(day, piece, speedMps, load).W,
      extraJ: day.extraJ[piece],
      sunW,
    })
  }
  fanFromKnot(day, found, layer)
  const row = (layer + 1) * bins
  for (let k = 0; k < bins; k++) {
    if (mostJ[row + k] > ceilingJ) mostJ[row + k] = ceilingJ
    if (mostJ[row + k] < floorJ) mostJ[row + k] = NEVER
  }
  nextKnot(day, found, layer)
}

/** Every bin reached at one speed. */
function shiftedBy(
  day: DayTables,
  found: Frontier,
  layer: number,
  by: { durationS: number; loadW: number; extraJ: number; sunW: Float64Array },
): void {
  const { fromS, stepS, bins, mostJ, knotS } = found
  const { durationS, loadW, extraJ, sunW } = by
  const { lossPerW, coulombic } = day.pack
  const from = layer * bins
  const to = from + bins
  const back = durationS / stepS
  const whole = Math.ceil(back - 1e-12)
  const u = whole - back
  const half = Math.ceil(back / 2 - 1e-12)
  const h = half - back / 2
  const first = Math.max(Math.ceil((knotS[layer] + durationS - fromS) / stepS - 1e-9), whole)
  const firstNode = Math.ceil((knotS[layer] - fromS) / stepS - 1e-9)
  const last = found.lastBin[layer + 1]
  for (let k = first; k <= last; k++) {
    const j = k - whole
    let J = NEVER
    if (j - 1 >= firstNode && j + 2 < bins) {
      const a = mostJ[from + j - 1]
      const d = mostJ[from + j + 2]
      if (a > NEVER && d > NEVER && mostJ[from + j] > NEVER && mostJ[from + j + 1] > NEVER)
        J = betweenFour(a, mostJ[from + j], mostJ[from + j + 1], d, u)
    }
    if (J === NEVER) J = energyAt(found, layer, fromS + k * stepS - durationS)
    if (J === NEVER) continue
    const m = k - half
    const netW = sunW[m] + (sunW[m + 1] - sunW[m]) * h - loadW
    J += ((netW > 0 ? netW * coulombic : netW) - netW * netW * lossPerW) * durationS - extraJ
    if (J > mostJ[to + k]) mostJ[to + k] = J
  }
}

/** Every bin that can be reached from the knot, each at its own speed. */
function fanFromKnot(day: DayTables, found: Frontier, layer: number): void {
  const { fromS, stepS, bins, mostJ, knotS, legs } = found
  const { piece } = legs[layer]
  const earliestS = knotS[layer] + pieceS(day, piece, day.fastestMps[piece])
  const latestS = knotS[layer] + pieceS(day, piece, Math.min(day.slowestMps, day.fastestMps[piece]))
  for (let k = Math.max(Math.ceil((earliestS - fromS) / stepS), 0); k < bins; k++) {
    const t = fromS + k * stepS
    if (t > latestS) break
    const J = drivenJ(day, found, layer, t, pieceMps(day, piece, t - knotS[layer]))
    const at = (layer + 1) * bins + k
    if (J > mostJ[at]) mostJ[at] = J
  }
}

const scratch: Load = { W: 0, slope: 0 }

/** Energy at an instant behind a piece driven at a speed, before ceiling and floor. [J] */
export function drivenJ(day: DayTables, found: Frontier, layer: number, atS: number, speedMps: number): number {
  const { piece } = found.legs[layer]
  const durationS = pieceS(day, piece, speedMps)
  const J = energyAt(found, layer, atS - durationS)
  if (J === NEVER) return NEVER
  const sunW = rowAt(day.harvestW, piece * day.clock.count, day.clock, atS - durationS / 2)
  return J + storedW(day.pack, sunW - loadAt(day, piece, speedMps, scratch).W) * durationS - day.extraJ[piece]
}

/** The earliest instant behind a piece: at the fastest speed, or as much later as the floor asks. */
function nextKnot(day: DayTables, found: Frontier, layer: number): void {
  const { knotS, knotJ, legs, mostJ, bins, fromS, stepS } = found
  const { ceilingJ } = day.pack
  const { piece } = legs[layer]
  const floorJ = day.floorJ[piece + 1]
  const earliestS = knotS[layer] + pieceS(day, piece, day.fastestMps[piece])
  const atOnceJ = drivenJ(day, found, layer, earliestS, day.fastestMps[piece])
  const settle = (S: number, J: number): void => {
    knotS[layer + 1] = S
    knotJ[layer + 1] = Math.min(J, ceilingJ)
  }
  if (atOnceJ >= floorJ) {
    if (earliestS <= day.latestS) settle(earliestS, atOnceJ)
    return
  }
  const row = (layer + 1) * bins
  let firstBin = 0
  while (firstBin < bins && mostJ[row + firstBin] === NEVER) firstBin++
  if (firstBin === bins) return
  const firstBinS = fromS + firstBin * stepS
  const { atS, J } = firstAbove(
    (s) => bestArrival(day, found, layer, s).J - floorJ,
    { atS: earliestS, J: atOnceJ - floorJ },
    { atS: firstBinS, J: mostJ[row + firstBin] - floorJ },
  )
  settle(atS, J + floorJ)
}

/** Narrowing of the golden section. */
const GOLDEN = (Math.sqrt(5) - 1) / 2
const TRIED = 12
const CLOSE_MPS = 1e-3

/** The speed over a piece with which most energy is left at an instant behind it, and that energy. */
export function bestArrival(
  day: DayTables,
  found: Frontier,
  layer: number,
  atS: number,
): { J: number; speedMps: number } {
  const { piece } = found.legs[layer]
  const fastest = day.fastestMps[piece]
  const slowest = Math.min(day.slowestMps, fastest)
  const fromKnotMps = pieceMps(day, piece, atS - found.knotS[layer])
  const lowest = fromKnotMps > 0 ? Math.max(slowest, Math.min(fromKnotMps, fastest)) : fastest
  const best = { J: NEVER, speedMps: lowest }
  const leftJ = (speedMps: number): number => {
    const J = drivenJ(day, found, layer, atS, speedMps)
    if (J > best.J) {
      best.J = J
      best.speedMps = speedMps
    }
    return J
  }
  const step = (fastest - lowest) / TRIED
  if (!(step > 0)) {
    leftJ(lowest)
    return best
  }
  for (let j = 0; j <= TRIED; j++) leftJ(lowest + step * j)
  narrow(leftJ, Math.max(best.speedMps - step, lowest), Math.min(best.speedMps + step, fastest))
  return best
}

/** Golden section towards the most of a function between two speeds. */
function narrow(of: (speedMps: number) => number, fromMps: number, toMps: number): void {
  let low = fromMps
  let high = toMps
  let left = high - (high - low) * GOLDEN
  let right = low + (high - low) * GOLDEN
  let [atLeft, atRight] = [of(left), of(right)]
  while (high - low > CLOSE_MPS) {
    if (atLeft < atRight) {
      low = left
      left = right
      atLeft = atRight
      right = low + (high - low) * GOLDEN
      atRight = of(right)
    } else {
      high = right
      right = left
      atRight = atLeft
      left = high - (high - low) * GOLDEN
      atLeft = of(left)
    }
  }
}
