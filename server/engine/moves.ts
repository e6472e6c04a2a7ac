import type { DrivenRoad } from './driven-road.ts'
import { CRAWL_MPS, pullMps2 } from './driven-road.ts'

/** Parts of drives with one acceleration each, one behind the other. Columns have room for more than `count`. */
export interface Moves {
  count: number
  piece: Int32Array
  /** Place from the start of the race. */
  fromM: Float64Array
  toM: Float64Array
  fromMps: Float64Array
  toMps: Float64Array
  /** Expected halts included. */
  durationS: Float64Array
}

/** A piece, or a part of it, to be driven through. Speeds are squared, for so they are linear in distance. [m²/s²] */
export interface Passage {
  piece: number
  fromM: number
  toM: number
  /** Speed on entering, squared. */
  entry: number
  /** Most that the speed on leaving may be, squared. */
  exitMost: number
}

/** Speeds closer together than this are one. [Mps] */
const SAME_MPS = 0.02

/** A move shorter than this joins its neighbour. [S] */
const MOMENT_S = 0.02

/** A pull that changes with speed is taken as one over this share of the way to the held speed, or this much. [Mps] */
const BAND_SHARE = 0.2
const BAND_MPS = 0.1

/** Less pull than this brings no speed in any time that counts. [Mps2] */
const NO_PULL_MPS2 = 1e-3

export const newMoves = (room = 256): Moves => ({
  count: 0,
  piece: new Int32Array(room),
  fromM: new Float64Array(room),
  toM: new Float64Array(room),
  fromMps: new Float64Array(room),
  toMps: new Float64Array(room),
  durationS: new Float64Array(room),
})

// Scratch of one passage, which is never re-entered: where the car is, and the next change of speed.
const now = { squared: 0, leftM: 0, placeM: 0, timeS: 0 }
const next = { squared: 0, mps2: 0 }

/**
 * Drives through a piece as fast as bounds, motor, held speed and the speed on leaving allow; adds its moves.
 *
 * Faster than the motor can hold, a car slows as the road takes it. Braking begins where it must. Where the motor
 * pulls less than the driver's bound, the pull at the higher end of a small band of speeds holds for the band, so
 * that the motor is nowhere asked for more than it has.
 *
 * @param out  null when only time and speed are asked
 * @returns speed on leaving, squared, and the time taken; to be read before the next call
 */
export function pass(road: DrivenRoad, passage: Passage, out: Moves | null): { squared: number; timeS: number } {
  const { piece, exitMost } = passage
  const { brakingMps2 } = road.bounds
  now.squared = passage.entry
  now.leftM = (passage.toM - passage.fromM) / Math.cos(road.course.pieces.gradeRad[piece])
  now.placeM = passage.fromM
  now.timeS = 0
  while (now.leftM > 0) {
    const { leftM, squared } = now
    nextChange(road, piece, squared)
    const { mps2 } = next
    const reachM = mps2 === 0 ? leftM : (next.squared - squared) / (2 * mps2)
    const isLast = reachM >= leftM - MOMENT_S * Math.sqrt(next.squared)
    const brakeM =
      mps2 > -brakingMps2 ? (exitMost + 2 * brakingMps2 * leftM - squared) / (2 * (mps2 + brakingMps2)) : leftM
    if (brakeM < (isLast ? leftM : reachM)) brakeAfter(road, passage, Math.max(brakeM, 0), out)
    else if (isLast) move(road, passage, leftM, Math.min(squared + 2 * mps2 * Math.min(reachM, leftM), exitMost), out)
    else move(road, passage, reachM, next.squared, out)
  }
  return now
}

/** What the car does from a speed on, braking aside: gains, holds or loses speed, and up to which. */
function nextChange(road: DrivenRoad, piece: number, squared: number): void {
  const speedMps = Math.sqrt(squared)
  const heldMps = road.heldMps[piece]
  const gainMps = heldMps - speedMps
  next.squared = squared
  next.mps2 = 0
  if (gainMps > SAME_MPS) gain(road, piece, speedMps, heldMps)
  else if (gainMps < -1e-9) {
    const toMps = Math.max(heldMps, speedMps - Math.max(-gainMps * BAND_SHARE, BAND_MPS))
    next.squared = toMps * toMps
    next.mps2 = Math.min(pullMps2(road, piece, speedMps), -NO_PULL_MPS2)
  }
}

function gain(road: DrivenRoad, piece: number, speedMps: number, heldMps: number): void {
  const boundMps2 = road.bounds.accelerationMps2
  let toMps = heldMps
  let mps2 = pullMps2(road, piece, heldMps)
  if (mps2 < boundMps2) {
    toMps = Math.min(speedMps + Math.max((heldMps - speedMps) * BAND_SHARE, BAND_MPS), heldMps)
    mps2 = pullMps2(road, piece, toMps)
  }
  if (speedMps < CRAWL_MPS) mps2 = Math.max(mps2, NO_PULL_MPS2)
  if (mps2 < NO_PULL_MPS2) return
  next.squared = toMps * toMps
  next.mps2 = Math.min(mps2, boundMps2)
}

/** The piece's rest: on as it is for so far, then braking to its end; one move where either would be next to none. */
function brakeAfter(road: DrivenRoad, passage: Passage, freeM: number, out: Moves | null): void {
  const { exitMost } = passage
  const { squared } = now
  const topMps = Math.sqrt(squared + 2 * next.mps2 * freeM)
  const entryMps = Math.sqrt(squared)
  const exitMps = Math.sqrt(exitMost)
  const freeS = (2 * freeM) / (entryMps + topMps)
  const isOne = (freeS < MOMENT_S || topMps - exitMps < SAME_MPS) && entryMps + exitMps > CRAWL_MPS
  if (!isOne && freeM > 0) move(road, passage, freeM, topMps * topMps, out)
  move(road, passage, now.leftM, exitMost, out)
}

/** One move over a length to a speed, squared. */
function move(road: DrivenRoad, passage: Passage, lengthM: number, toSquared: number, out: Moves | null): void {
  const { piece } = passage
  const fromMps = Math.sqrt(now.squared)
  const toMps = Math.sqrt(toSquared)
  const isLast = lengthM >= now.leftM
  const toM = isLast ? passage.toM : now.placeM + lengthM * Math.cos(road.course.pieces.gradeRad[piece])
  const durationS = (2 * lengthM) / (fromMps + toMps) + haltsS(road, piece, lengthM, fromMps, toMps)
  if (out !== null) append(out, { piece, fromM: now.placeM, toM, fromMps, toMps, durationS })
  now.squared = toSquared
  now.leftM = isLast ? 0 : now.leftM - lengthM
  now.placeM = toM
  now.timeS += durationS
}

/** Time that expected halts add: each brakes from the speed it meets and starts again. */
function haltsS(road: DrivenRoad, piece: number, lengthM: number, fromMps: number, toMps: number): number {
  const perM = road.course.pieces.haltsPerM[piece]
  if (perM === 0) return 0
  const { accelerationMps2, brakingMps2 } = road.bounds
  const meanMps = (2 / 3) * (fromMps + toMps - (fromMps * toMps) / (fromMps + toMps))
  return perM * lengthM * (meanMps / 2) * (1 / brakingMps2 + 1 / accelerationMps2)
}

interface Move {
  piece: number
  fromM: number
  toM: number
  fromMps: number
  toMps: number
  durationS: number
}

function append(moves: Moves, one: Move): void {
  if (moves.count === moves.piece.length) grow(moves)
  const i = moves.count++
  moves.piece[i] = one.piece
  moves.fromM[i] = one.fromM
  moves.toM[i] = one.toM
  moves.fromMps[i] = one.fromMps
  moves.toMps[i] = one.toMps
  moves.durationS[i] = one.durationS
}

function grow(moves: Moves): void {
  const wider = newMoves(2 * moves.piece.length)
  wider.piece.set(moves.piece)
  moves.piece = wider.piece
  for (const name of ['fromM', 'toM', 'fromMps', 'toMps', 'durationS'] as const) {
    wider[name].set(moves[name])
    moves[name] = wider[name]
  }
}
