import { changeJ, type DayTables, loadAt, pieceS, rowAt, standsAt, storedW, waitedJ } from './day-tables.ts'

/** Speeds of a day and where the car waits. */
export interface Drive {
  /** [Mps] (pieces) */
  speedMps: Float64Array
  /** Waiting in front of each piece and, last, at the end, stops not counted. [S] (pieces + 1) */
  waitS: Float64Array
}

/** Energy of the changes of speed that a piece brings: from the piece before, and to rest in front of a stop. [J] */
export function motionJ(day: DayTables, speedMps: Float64Array, piece: number): number {
  const { kinetic } = day
  if (!(kinetic.massKg > 0)) return 0
  const v = speedMps[piece]
  const started = changeJ(kinetic, standsAt(day, piece) ? 0 : speedMps[piece - 1], v)
  return standsAt(day, piece + 1) ? started + changeJ(kinetic, v, 0) : started
}

/**
 * The drive that speeds of the course mean on a day's tables: within what each piece allows, without waiting.
 *
 * @param courseMps  [Mps] (pieces of the course)
 * @param first      the day's first piece on the course
 */
export const driveAlong = (day: DayTables, courseMps: Float64Array, first: number): Drive => ({
  speedMps: day.fastestMps.map((fastest, i) => Math.min(courseMps[first + i], fastest)),
  waitS: new Float64Array(day.pieces + 1),
})

/** A drive through the tables: clock and energy at every edge between pieces, stops and waits behind them. */
export interface Track {
  /** Instant at which each piece is entered and, last, the end is reached. [S] (pieces + 1) */
  atS: Float64Array
  /** Energy then; at a stop, when it is left. [J] (pieces + 1) */
  energyJ: Float64Array
  /** Energy on arrival in front of each piece, before stop and waiting. [J] (pieces + 1) */
  arrivalJ: Float64Array
  /** Energy when the day closes. [J] */
  duskJ: number
  /** How much the worst place or the close lacks; 0 or less where the drive holds. [J] */
  shortJ: number
  /** How late the latest arrival is. [S] */
  lateS: number
}

/**
 * Drives a day through its tables, piece by piece: harvest at the middle of each piece, one speed a piece.
 *
 * @param drive  speeds within the pieces' limits
 */
export function simulate(day: DayTables, drive: Drive): Track {
  const { pieces, pack, clock, stops } = day
  const atS = new Float64Array(pieces + 1)
  const energyJ = new Float64Array(pieces + 1)
  const arrivalJ = new Float64Array(pieces + 1)
  const load = { W: 0, slope: 0 }
  let t = day.start.atS
  let E = day.start.energyJ
  let shortJ = Number.NEGATIVE_INFINITY
  let lateS = Number.NEGATIVE_INFINITY
  let nextStop = 0
  for (let i = 0; i <= pieces; i++) {
    arrivalJ[i] = E
    if (i > 0) shortJ = Math.max(shortJ, day.floorJ[i] - E)
    while (nextStop < stops.length && stops[nextStop].beforePiece === i) {
      const stop = stops[nextStop++]
      lateS = Math.max(lateS, t - stop.closesS)
      E = Math.min(pack.ceilingJ, E + rowAt(stop.gainJ, 0, clock, t))
      t += rowAt(stop.lengthS, 0, clock, t)
    }
    const waitS = drive.waitS[i]
    if (waitS > 0) {
      E = Math.min(pack.ceilingJ, E + waitedJ(day, i, t, waitS))
      t += waitS
    }
    atS[i] = t
    energyJ[i] = E
    if (i === pieces) break
    const durationS = pieceS(day, i, drive.speedMps[i])
    const sunW = rowAt(day.harvestW, i * clock.count, clock, t + durationS / 2)
    E = Math.min(
      pack.ceilingJ,
      E +
        storedW(pack, sunW - loadAt(day, i, drive.speedMps[i], load).W) * durationS -
        day.extraJ[i] -
        motionJ(day, drive.speedMps, i),
    )
    t += durationS
  }
  const duskJ = Math.min(pack.ceilingJ, E + rowAt(day.duskGainJ, 0, clock, t))
  return {
    atS,
    energyJ,
    arrivalJ,
    duskJ,
    shortJ: Math.max(shortJ, day.targetJ - duskJ),
    lateS: Math.max(lateS, t - day.latestS),
  }
}
