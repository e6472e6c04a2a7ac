import { type DayTables, type Load, loadAt, pieceS, rowAt } from '../planner/day-tables.ts'
import { type Drive, motionJ } from '../planner/simulate.ts'
import { normals } from './normals.ts'
import type { DayEffect } from './day-effects.ts'
import { CAUSES, type Cause, type Spreads } from './spread.ts'

/** A day driven at fixed speeds, laid out for many members. Arrays have one entry per piece. */
export interface Course {
  day: DayTables
  durationS: Float64Array
  harvestW: Float64Array
  loadW: Float64Array
  /** What a piece takes on top of its load, changes of speed included. [J] */
  extraJ: Float64Array
  /** Change of load with the headwind. [W·s/m] */
  perHeadwind: Float64Array
  /** Most that a factor on the sun can be: the clear sky over the forecast. */
  mostSun: Float64Array
  /** How much of the wandering factor is remembered from the piece before, and how much of it is new. */
  memory: Float64Array
  novelty: Float64Array
  /** Stop in front of each piece: what it brings; 0 where there is none. [J] (pieces + 1) */
  stopJ: Float64Array
  duskJ: number
  endS: number
  /** What else holds all day, each with a number of its own. */
  effects: DayEffect[]
}

/** What the members of an ensemble did. */
export interface Members {
  count: number
  /** Energy at each edge, after the stop that may stand there, a row a member. [J] (count × (pieces + 1)) */
  energyJ: Float32Array
  /** Edges with a stop, and the energy on arrival there, a row a member. [J] (count × stops) */
  stopEdges: Int32Array
  arriveJ: Float32Array
  /** Energy at the close. [J] (count) */
  duskJ: Float64Array
  /** Harvest on the road. [J] (count) */
  harvestJ: Float64Array
  /** Least spare over the floor, and the edge where it is. [J] (count) */
  spareJ: Float64Array
  spareEdge: Int32Array
}

/**
 * Lays a drive out for an ensemble.
 *
 * @param clearW        what the sun would bring under a clear sky as each piece is passed. [W] (pieces)
 * @param perHeadwind   change of each piece's load with the headwind at its speed. [W·s/m] (pieces)
 * @param effects       what else holds all day; none where left out
 */
export function courseOf(
  day: DayTables,
  drive: Drive,
  of: { clearW: Float64Array; perHeadwind: Float64Array; spreads: Spreads; effects?: DayEffect[] },
): Course {
  const n = day.pieces
  const column = () => new Float64Array(n)
  const course: Course = {
    day,
    durationS: column(),
    harvestW: column(),
    loadW: column(),
    extraJ: column(),
    perHeadwind: of.perHeadwind,
    mostSun: column(),
    memory: column(),
    novelty: column(),
    stopJ: new Float64Array(n + 1),
    duskJ: 0,
    endS: 0,
    effects: of.effects ?? [],
  }
  const load: Load = { W: 0, slope: 0 }
  let t = day.start.atS
  const stand = (edge: number): number => {
    const before = t
    for (const stop of day.stops) {
      if (stop.beforePiece !== edge) continue
      course.stopJ[edge] += rowAt(stop.gainJ, 0, day.clock, t)
      t += rowAt(stop.lengthS, 0, day.clock, t)
    }
    t += drive.waitS[edge]
    return t - before
  }
  for (let i = 0; i < n; i++) {
    const stoodS = stand(i)
    course.durationS[i] = pieceS(day, i, drive.speedMps[i])
    course.harvestW[i] = rowAt(day.harvestW, i * day.clock.count, day.clock, t + course.durationS[i] / 2)
    course.loadW[i] = loadAt(day, i, drive.speedMps[i], load).W
    course.extraJ[i] = day.extraJ[i] + motionJ(day, drive.speedMps, i)
    course.mostSun[i] = Math.max(course.harvestW[i] > 1 ? of.clearW[i] / course.harvestW[i] : 1, 1)
    const goneS = stoodS + course.durationS[i]
    course.memory[i] = Math.exp(-goneS / of.spreads.wanderS - day.lengthM[i] / of.spreads.wanderM)
    course.novelty[i] = Math.sqrt(1 - course.memory[i] * course.memory[i])
    t += course.durationS[i]
  }
  stand(n)
  course.endS = t
  course.duskJ = rowAt(day.duskGainJ, 0, day.clock, t)
  return course
}

const LEAST_SUN = 0.02
/** Normal numbers that a member draws before it sets off; then one a piece. */
const DAY_DRAWS = 6

const edgesWithStop = ({ stopJ }: Course): Int32Array =>
  Int32Array.from([...stopJ.keys()].filter((edge) => stopJ[edge] !== 0))

/**
 * Drives the same speeds through many days that differ as the spreads say.
 *
 * The sun's factor is a day's own plus one that wanders (an Ornstein–Uhlenbeck process over time and place), never
 * above the clear sky; wind, road, trackers, opening and the course's effects differ once a day.
 *
 * @param only  one cause or one of the course's effects alone, with the numbers that it would have among all
 * @source Uhlenbeck & Ornstein 1930, Physical Review 36, 823 (the process; sampled exactly at the edges)
 */
export function members(
  course: Course,
  spreads: Spreads,
  count: number,
  seed: number,
  only?: Cause | DayEffect,
): Members {
  const { day } = course
  const { pieces: n, pack, floorJ } = day
  const stopEdges = edgesWithStop(course)
  const out: Members = {
    count,
    energyJ: new Float32Array(count * (n + 1)),
    stopEdges,
    arriveJ: new Float32Array(count * stopEdges.length),
    duskJ: new Float64Array(count),
    harvestJ: new Float64Array(count),
    spareJ: new Float64Array(count),
    spareEdge: new Int32Array(count),
  }
  const on = (cause: Cause): number => (only === undefined || only === cause ? 1 : 0)
  const [sun, wind, road, trackers, opening] = CAUSES.map(on)
  const effects = course.effects.filter((effect) => only === undefined || only === effect)
  const firstEffect = only === undefined ? DAY_DRAWS : DAY_DRAWS + course.effects.indexOf(effects[0])
  const firstPiece = DAY_DRAWS + course.effects.length
  const draw = normals(seed)
  const drawn = new Float64Array(firstPiece + n)
  const besideJ = new Float64Array(n)
  const { coulombic, lossPerW, ceilingJ } = pack
  for (let m = 0; m < count; m++) {
    draw(drawn)
    const sunDay = sun * spreads.sunDay * drawn[0]
    const headwindMps = wind * spreads.headwindMps * drawn[1]
    const roadFactor = 1 + road * spreads.roadLoad * drawn[2]
    const trackerFactor = Math.max(1 + trackers * spreads.trackers * drawn[3], 0)
    besideJ.set(course.extraJ)
    let startJ = day.start.energyJ + opening * spreads.openingJ * drawn[4]
    let harvestJ = 0
    for (let e = 0; e < effects.length; e++) {
      const { pieceJ } = effects[e]
      const times = drawn[firstEffect + e]
      startJ += times * effects[e].morningJ
      harvestJ += times * effects[e].harvestJ
      for (let i = 0; i < n; i++) besideJ[i] -= times * pieceJ[i]
    }
    let E = Math.min(Math.max(startJ, 0), ceilingJ)
    let wander = drawn[5]
    let spareJ = Number.POSITIVE_INFINITY
    let spareEdge = 0
    const row = m * (n + 1)
    let factor = 1
    let stop = m * stopEdges.length
    for (let i = 0; i <= n; i++) {
      if (i > 0 && E - floorJ[i] < spareJ) {
        spareJ = E - floorJ[i]
        spareEdge = i
      }
      if (course.stopJ[i] !== 0) {
        out.arriveJ[stop++] = E
        E += course.stopJ[i] * factor * trackerFactor
        for (let e = 0; e < effects.length; e++) E += drawn[firstEffect + e] * effects[e].stopJ[i]
        if (E > ceilingJ) E = ceilingJ
      }
      out.energyJ[row + i] = E
      if (i === n) break
      wander = course.memory[i] * wander + course.novelty[i] * drawn[firstPiece + i]
      const wanted = 1 + sunDay + sun * spreads.sunWander * wander
      factor = wanted < LEAST_SUN ? LEAST_SUN : wanted > course.mostSun[i] ? course.mostSun[i] : wanted
      const harvestW = course.harvestW[i] * factor * trackerFactor
      const netW = harvestW - course.loadW[i] * roadFactor - course.perHeadwind[i] * headwindMps
      E += ((netW > 0 ? netW * coulombic : netW) - netW * netW * lossPerW) * course.durationS[i] - besideJ[i]
      if (E > ceilingJ) E = ceilingJ
      harvestJ += harvestW * course.durationS[i]
    }
    E += course.duskJ * factor * trackerFactor
    for (let e = 0; e < effects.length; e++) E += drawn[firstEffect + e] * effects[e].duskJ
    out.duskJ[m] = Math.min(E, ceilingJ)
    out.harvestJ[m] = harvestJ
    out.spareJ[m] = spareJ
    out.spareEdge[m] = spareEdge
  }
  return out
}
