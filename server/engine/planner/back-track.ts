import { type DayTables, pieceS, rowAt, storedW } from './day-tables.ts'
import { bestArrival, energyAt, type Frontier } from './frontier.ts'
import type { Drive } from './simulate.ts'

const BISECTIONS = 50

/** Energy when the day closes after an arrival. [J] */
const duskJ = (day: DayTables, J: number, atS: number): number =>
  Math.min(day.pack.ceilingJ, J + rowAt(day.duskGainJ, 0, day.clock, atS))

/**
 * The earliest arrival at the end that keeps floor and target.
 *
 * @returns Infinity where there is none [S]
 */
export function earliestEnd(day: DayTables, found: Frontier): number {
  const layer = found.legs.length
  const holds = (atS: number): boolean => {
    const J = energyAt(found, layer, atS)
    return J >= day.floorJ[day.pieces] && duskJ(day, J, atS) >= day.targetJ
  }
  let low = found.knotS[layer]
  if (!(low <= day.latestS)) return Number.POSITIVE_INFINITY
  if (holds(low)) return low
  let high = Number.POSITIVE_INFINITY
  for (let k = 0; k < found.bins; k++) {
    const t = found.fromS + k * found.stepS
    if (t <= low) continue
    if (holds(t)) {
      high = t
      break
    }
    low = t
  }
  if (high === Number.POSITIVE_INFINITY) return high
  for (let i = 0; i < BISECTIONS && high - low > 1e-6; i++) {
    const middle = (low + high) / 2
    if (holds(middle)) high = middle
    else low = middle
  }
  return high
}

/** The drive that leads to an instant at the end, found from the end back at continuous times. */
export function backTrack(day: DayTables, found: Frontier, endS: number): Drive {
  const drive = { speedMps: new Float64Array(day.pieces), waitS: new Float64Array(day.pieces + 1) }
  let atS = endS
  for (let layer = found.legs.length - 1; layer >= 0; layer--) {
    const { piece, stop } = found.legs[layer]
    if (stop >= 0) {
      atS = Math.max(beforeStop(day, found, layer, atS), found.knotS[layer])
      continue
    }
    let best = bestArrival(day, found, layer, atS)
    for (;;) {
      const earlierS = atS - found.stepS
      if (!(earlierS >= found.knotS[layer + 1])) break
      const waitedJ = afterWait(day, found, layer + 1, earlierS, found.stepS)
      if (!(waitedJ > best.J + WORTH_WAITING_J)) break
      drive.waitS[piece + 1] += found.stepS
      atS = earlierS
      best = bestArrival(day, found, layer, atS)
    }
    drive.speedMps[piece] = best.speedMps
    atS -= pieceS(day, piece, best.speedMps)
  }
  drive.waitS[0] += Math.max(atS - day.start.atS, 0)
  return drive
}

/** Less than this gained by waiting is interpolation. [J] */
const WORTH_WAITING_J = 200

function afterWait(day: DayTables, found: Frontier, layer: number, atS: number, lengthS: number): number {
  const J = energyAt(found, layer, atS)
  const piece = Math.min(layer < found.legs.length ? found.legs[layer].piece : day.pieces - 1, day.pieces - 1)
  const sunW = rowAt(day.harvestW, piece * day.clock.count, day.clock, atS + lengthS / 2)
  return Math.min(day.pack.ceilingJ, J + storedW(day.pack, sunW - day.waitingLoadW) * lengthS)
}

/** Arrival at a stop that is left at an instant. [S] */
function beforeStop(day: DayTables, found: Frontier, layer: number, leaveS: number): number {
  const { lengthS } = day.stops[found.legs[layer].stop]
  let low = found.knotS[layer]
  let high = leaveS
  for (let i = 0; i < BISECTIONS && high - low > 1e-6; i++) {
    const middle = (low + high) / 2
    if (middle + rowAt(lengthS, 0, day.clock, middle) <= leaveS) low = middle
    else high = middle
  }
  return low
}
