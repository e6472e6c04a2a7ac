import { course } from '../../server/engine/course.ts'
import type { Course } from '../../server/engine/course.ts'
import type { Drive } from '../../server/engine/drive.ts'
import { drivenRoad } from '../../server/engine/driven-road.ts'
import type { MotionBounds } from '../../server/engine/driven-road.ts'
import { driveLeg } from '../../server/engine/leg.ts'
import { newMoves } from '../../server/engine/moves.ts'
import type { Moves } from '../../server/engine/moves.ts'
import { DRIVE, LOAD } from './invented-car.ts'

export const USUAL: MotionBounds = { accelerationMps2: 0.6, brakingMps2: 1 }
const STRONG: Drive = { ...DRIVE, motorMaxW: 1e6, motorMaxN: 1e5 }

/** Pieces of these lengths along the equator, level or with these grades. [m] */
function road(lengthsM: number[], grades: number[] = []): Course {
  const edges = [0]
  for (const m of lengthsM) edges.push(edges[edges.length - 1] + m)
  const roads = course([
    {
      points: {
        latRad: new Float64Array(edges.length),
        lonRad: Float64Array.from(edges, (m) => m / 6_378_137),
        altM: new Float64Array(edges.length),
      },
      stretches: [],
      fromM: 0,
      toM: edges[edges.length - 1],
      cutsM: edges.slice(1, -1),
      roughnessM: 0.03,
      roadHeatC: 0,
      limitMps: 100,
    },
  ])
  // One piece for each length: longer ones are cut in even parts, which this road does without.
  if (roads.pieces.count !== lengthsM.length) throw new Error(`${roads.pieces.count} pieces`)
  grades.forEach((slope, i) => void (roads.pieces.gradeRad[i] = Math.atan(slope)))
  return roads
}

export interface Asked {
  lengthsM: number[]
  mps: number[]
  grades?: number[]
  bounds?: MotionBounds
  drive?: Drive
  fromM?: number
  withinS?: number
  halts?: number[]
}

export function driven(asked: Asked) {
  const {
    lengthsM,
    mps,
    grades = [],
    bounds = USUAL,
    drive = STRONG,
    fromM = 0,
    withinS = Infinity,
    halts = [],
  } = asked
  const roads = road(lengthsM, grades)
  halts.forEach((perM, i) => void (roads.pieces.haltsPerM[i] = perM))
  const on = drivenRoad({ load: LOAD, drive, bounds }, roads, Float64Array.from(mps))
  const moves = newMoves(2)
  const piece = roads.pieces.fromM.findLastIndex((m) => m <= fromM)
  const leg = driveLeg(on, { fromM, toM: roads.lengthM, piece, withinS }, moves)
  return { ...leg, moves, road: on, lengthM: roads.lengthM }
}

export const each = (moves: Moves) =>
  Array.from({ length: moves.count }, (_, i) => ({
    piece: moves.piece[i],
    fromM: moves.fromM[i],
    toM: moves.toM[i],
    fromMps: moves.fromMps[i],
    toMps: moves.toMps[i],
    durationS: moves.durationS[i],
  }))
