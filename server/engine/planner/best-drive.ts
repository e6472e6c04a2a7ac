import { backTrack, earliestEnd } from './back-track.ts'
import type { DayTables } from './day-tables.ts'
import { frontier } from './frontier.ts'
import { isBetter, refine, type Refined } from './refine.ts'
import { simulate } from './simulate.ts'

const BIN_S = 60
const SPEED_STEP_MPS = 10 / 3.6

/**
 * The best drive through a day's tables: the frontier's, refined.
 *
 * @returns null where the frontier knows no drive that holds
 */
export function bestDrive(tables: DayTables): Refined | null {
  const found = frontier(tables, BIN_S, SPEED_STEP_MPS, someEndS(tables))
  const endS = earliestEnd(tables, found)
  if (endS === Number.POSITIVE_INFINITY) return null
  const drive = backTrack(tables, found, endS)
  const refined = refine(tables, drive)
  if (drive.waitS.every((s) => s === 0)) return refined
  // Refinement leaves waits as they are: a drive that need not wait is found without them.
  const straight = refine(tables, { ...drive, waitS: new Float64Array(tables.pieces + 1) })
  return isBetter(straight.track, refined.track) ? straight : refined
}

/** The end of the fastest constant speed that holds; the day's where none does. [S] */
function someEndS(tables: DayTables): number {
  const waitS = new Float64Array(tables.pieces + 1)
  for (let kmh = 130; kmh >= 30; kmh -= 2) {
    const speedMps = tables.fastestMps.map((fastest) => Math.min(fastest, kmh / 3.6))
    const { shortJ, lateS, atS } = simulate(tables, { speedMps, waitS })
    if (shortJ <= 0 && lateS <= 0) return atS[tables.pieces]
  }
  return tables.latestS
}
