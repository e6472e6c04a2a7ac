import type { DayTables } from '../../../server/engine/planner/day-tables.ts'
import type { Drive } from '../../../server/engine/planner/simulate.ts'

/** Straight line through the table's two neighbours, by a search of its own. */
function lookUp(values: ArrayLike<number>, from: number, step: number, at: number): number {
  const last = values.length - 1
  const place = Math.min(Math.max((at - from) / step, 0), last)
  const left = Math.min(Math.floor(place), last - 1)
  return values[left] * (left + 1 - place) + values[left + 1] * (place - left)
}

/** What a car of the tables pays for a change of speed: dearer to gain than what is given back, rounded over 150 J. */
function changeOf({ kinetic }: DayTables, fromMps: number, toMps: number): number {
  if (kinetic.massKg === 0) return 0
  const gained = (kinetic.massKg / 2) * (toMps ** 2 - fromMps ** 2)
  const upward = (gained + Math.hypot(gained, 150) - 150) / 2
  return kinetic.perGained * upward + kinetic.perLost * (gained - upward)
}

/** How a day went by the second. */
export interface Driven {
  endS: number
  duskJ: number
  /** Least energy on arrival at an edge, and least over the floor there. [J] */
  lowestJ: number
  spareJ: number
}

/**
 * Another simulator of a day: a loop over seconds with the car's place as its state, stops as a state of their own.
 * It shares no code with the planner but the tables; sun is that of the middle of each piece's passage, as they say.
 *
 * @param startJ  energy at the start, where it is not that of the tables. [J]
 */
export function drivenByTheSecond(day: DayTables, drive: Drive, startJ = day.start.energyJ): Driven {
  const { clock, speeds, pack } = day
  const row = (table: Float64Array, index: number, width: number) => table.subarray(index * width, (index + 1) * width)
  const kept = (W: number) => (W > 0 ? W * pack.coulombic : W) - W * W * pack.lossPerW
  let now = day.start.atS
  let J = startJ
  let goesMps = 0
  let lowestJ = Number.POSITIVE_INFINITY
  let spareJ = Number.POSITIVE_INFINITY
  for (let piece = 0; piece < day.pieces; piece++) {
    for (const stop of day.stops.filter((one) => one.beforePiece === piece)) {
      J = Math.min(J + lookUp(stop.gainJ, clock.from, clock.step, now), pack.ceilingJ)
      now += lookUp(stop.lengthS, clock.from, clock.step, now)
    }
    for (let left = drive.waitS[piece]; left > 0; left -= Math.min(left, 1)) {
      const second = Math.min(left, 1)
      const sunW = lookUp(row(day.harvestW, piece, clock.count), clock.from, clock.step, now + second / 2)
      J = Math.min(J + kept(sunW - day.waitingLoadW) * second, pack.ceilingJ)
      now += second
    }
    const speed = drive.speedMps[piece]
    const wholeS = day.lengthM[piece] / speed + day.extraS[piece]
    const sunW = lookUp(row(day.harvestW, piece, clock.count), clock.from, clock.step, now + wholeS / 2)
    const loadW = cubicLookUp(row(day.loadW, piece, speeds.count), speeds.from, speeds.step, speed)
    for (let gone = 0; gone < wholeS; gone++) {
      const second = Math.min(1, wholeS - gone)
      J += kept(sunW - loadW) * second
    }
    J -= day.extraJ[piece] + changeOf(day, goesMps, speed)
    goesMps = speed
    const stands = piece + 1 === day.pieces || day.stops.some((one) => one.beforePiece === piece + 1)
    if (stands) {
      J -= changeOf(day, goesMps, 0)
      goesMps = 0
    }
    J = Math.min(J, pack.ceilingJ)
    now += wholeS
    lowestJ = Math.min(lowestJ, J)
    spareJ = Math.min(spareJ, J - day.floorJ[piece + 1])
  }
  for (const stop of day.stops.filter((one) => one.beforePiece === day.pieces)) {
    J = Math.min(J + lookUp(stop.gainJ, clock.from, clock.step, now), pack.ceilingJ)
    now += lookUp(stop.lengthS, clock.from, clock.step, now)
  }
  const duskJ = Math.min(J + lookUp(day.duskGainJ, clock.from, clock.step, now), pack.ceilingJ)
  return { endS: now, duskJ, lowestJ, spareJ }
}

/** A day of a race, and what the morning adds before it is driven. */
export interface RacedDay {
  day: DayTables
  drive: Drive
  morningJ: number
}

/** Several days in turn with the nights between them: each opens with what the one before closed with. */
export function racedByTheSecond(days: RacedDay[], openingJ: number): Driven[] {
  let heldJ = openingJ
  return days.map(({ day, drive, morningJ }) => {
    const driven = drivenByTheSecond(day, drive, Math.min(heldJ + morningJ, day.pack.ceilingJ))
    heldJ = driven.duskJ
    return driven
  })
}

/** The cubic of Catmull and Rom by its matrix. */
export function cubicLookUp(values: Float64Array, from: number, step: number, at: number): number {
  const last = values.length - 1
  const place = Math.min(Math.max((at - from) / step, 0), last)
  const i = Math.min(Math.floor(place), last - 1)
  const u = place - i
  const p = [-1, 0, 1, 2].map((d) => {
    const j = i + d
    if (j < 0) return 2 * values[0] - values[1]
    if (j > last) return 2 * values[last] - values[last - 1]
    return values[j]
  })
  const weights = [-u + 2 * u * u - u ** 3, 2 - 5 * u * u + 3 * u ** 3, u + 4 * u * u - 3 * u ** 3, u ** 3 - u * u]
  return weights.reduce((sum, weight, d) => sum + (weight * p[d]) / 2, 0)
}
