import { pieces } from './route.ts'
import type { Pieces, RoadPoints, Stretch } from './route.ts'

/** One stage of the race before it is cut into pieces. */
export interface StageRoad {
  points: RoadPoints
  stretches: Stretch[]
  /** Part of the route that the stage runs on. [M] */
  fromM: number
  toM: number
  /** More places of the route that must be edges of pieces, where they lie on the stage. [M] */
  cutsM?: number[]
  roughnessM: number
  /** Warmth of the air over the panels above the air at 2 m, at 1000 W/m² of global light; left out 0. [K] */
  roadHeatC?: number
  /** Limit where no stretch has one. [Mps] */
  limitMps: number
}

/** A stage on the course: a run of pieces. */
export interface CourseStage {
  firstPiece: number
  endPiece: number
  /** Start and end from the start of the race. [M] */
  fromM: number
  toM: number
}

/** The roads of all stages one behind the other; distances run from the start of the race. */
export interface Course {
  pieces: Pieces
  roughnessM: Float64Array
  /** Warmth of the air over the panels above the air at 2 m, at 1000 W/m² of global light. [K] (pieces) */
  roadHeatC: Float64Array
  stages: CourseStage[]
  lengthM: number
}

/** Hills that rise or fall by so much are driven up and down; lower ones are levelled within a piece. [M] */
const SWING_M = 5

/** Longest piece of road with one grade, heading and limit. [M] */
export const PIECE_M = 1000

const COLUMNS = [
  'lengthM',
  'latRad',
  'lonRad',
  'altM',
  'startAltM',
  'endAltM',
  'gradeRad',
  'headingRad',
  'limitMps',
  'surfaceFactor',
  'haltsPerM',
] as const

/**
 * The stages' roads joined into one course of pieces of at most about 1 km.
 *
 * @param roads  one per stage, in the order they are driven
 * @throws InputError when a stage does not lie on its route
 */
export function course(roads: StageRoad[]): Course {
  const cut = roads.map(stagePieces)
  const count = cut.reduce((sum, p) => sum + p.count, 0)
  const joined = Object.fromEntries(['fromM', ...COLUMNS].map((name) => [name, new Float64Array(count)]))
  const roughnessM = new Float64Array(count)
  const roadHeatC = new Float64Array(count)
  const stages: CourseStage[] = []
  let at = 0
  let startM = 0
  cut.forEach((part, s) => {
    for (const name of COLUMNS) joined[name].set(part[name], at)
    roughnessM.fill(roads[s].roughnessM, at, at + part.count)
    roadHeatC.fill(roads[s].roadHeatC ?? 0, at, at + part.count)
    const fromM = startM
    for (let i = 0; i < part.count; i++) {
      joined.fromM[at + i] = startM
      startM += part.lengthM[i]
    }
    stages.push({ firstPiece: at, endPiece: at + part.count, fromM, toM: startM })
    at += part.count
  })
  return { pieces: { count, ...joined } as Pieces, roughnessM, roadHeatC, stages, lengthM: startM }
}

/** The pieces of one stage: the route's, cut at the stage's ends. */
function stagePieces(road: StageRoad): Pieces {
  const { fromM, toM, cutsM = [] } = road
  const within = cutsM.filter((m) => m > fromM && m < toM)
  const all = pieces(road.points, road.stretches, { cutsM: [fromM, toM, ...within], lengthM: PIECE_M, swingM: SWING_M })
  const inside: number[] = []
  for (let i = 0; i < all.count; i++) {
    const middleM = all.fromM[i] + all.lengthM[i] / 2
    if (middleM > fromM && middleM < toM) inside.push(i)
  }
  const part = Object.fromEntries(
    ['fromM', ...COLUMNS].map((name) => [name, Float64Array.from(inside, (i) => all[name as 'fromM'][i])]),
  )
  part.limitMps.forEach((limit, i) => {
    if (limit === Number.POSITIVE_INFINITY) part.limitMps[i] = road.limitMps
  })
  return { count: inside.length, ...part } as Pieces
}
