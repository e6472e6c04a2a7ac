import { type DayTables, loadAt } from '../../../server/engine/planner/day-tables.ts'
import { motionJ } from '../../../server/engine/planner/simulate.ts'

/** Straight line through a row of the tables. */
function lookUp(row: Float64Array, first: number, day: DayTables, at: number): number {
  const x = Math.min(Math.max((at - day.clock.from) / day.clock.step, 0), day.clock.count - 1.001)
  const i = Math.floor(x)
  return row[first + i] * (i + 1 - x) + row[first + i + 1] * (x - i)
}

/**
 * The earliest end over every choice of one speed of an even grid for each piece, without waiting.
 *
 * @param grid  speeds from the slowest to the fastest of each piece
 * @returns Infinity where no choice holds [S]
 */
export function everyChoice(day: DayTables, grid: number): number {
  const { pack, pieces } = day
  const kept = (W: number): number => (W > 0 ? W * pack.coulombic : W) - W * W * pack.lossPerW
  const choices = Array.from(day.fastestMps, (fastest, i) =>
    Array.from({ length: grid }, (_, g) => {
      const v = fastest + ((day.slowestMps - fastest) * g) / (grid - 1)
      return { v, s: day.lengthM[i] / v + day.extraS[i], W: loadAt(day, i, v, { W: 0, slope: 0 }).W }
    }),
  )
  const shortestS = choices.map((of) => Math.min(...of.map(({ s }) => s)))
  const leftS = shortestS.map((_, i) => shortestS.slice(i).reduce((sum, s) => sum + s, 0))
  const speedMps = new Float64Array(pieces)
  let best = Number.POSITIVE_INFINITY
  const go = (piece: number, t: number, J: number): void => {
    if (piece > 0 && J < day.floorJ[piece]) return
    let [now, has] = [t, J]
    for (const stop of day.stops) {
      if (stop.beforePiece !== piece) continue
      if (now > stop.closesS) return
      has = Math.min(has + lookUp(stop.gainJ, 0, day, now), pack.ceilingJ)
      now += lookUp(stop.lengthS, 0, day, now)
    }
    if (now + (leftS[piece] ?? 0) >= best) return
    if (piece === pieces) {
      const closes = Math.min(has + lookUp(day.duskGainJ, 0, day, now), pack.ceilingJ)
      if (closes >= day.targetJ && now <= day.latestS) best = now
      return
    }
    for (const { v, s, W } of choices[piece]) {
      speedMps[piece] = v
      const sunW = lookUp(day.harvestW, piece * day.clock.count, day, now + s / 2)
      const takenJ = day.extraJ[piece] + (day.kinetic.massKg > 0 ? motionJ(day, speedMps, piece) : 0)
      go(piece + 1, now + s, Math.min(has + kept(sunW - W) * s - takenJ, pack.ceilingJ))
    }
  }
  go(0, day.start.atS, day.start.energyJ)
  return best
}
