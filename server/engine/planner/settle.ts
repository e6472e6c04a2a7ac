import type { DayForecast } from '../forecast.ts'
import { type Along, type Reach } from './engine-tables.ts'
import { type DayTables, loadAt, pieceS, rowAt, storedW } from './day-tables.ts'
import { motionJ } from './simulate.ts'

/** Share of a piece's time that a car which comes to it faster can save at most. */
const MOST_SAVED = 0.4

/** What a forecast did on one piece of the road. */
interface Driven {
  fromS: number
  durationS: number
  storedJ: number
  isWhole: boolean
}

/**
 * Sets tables right along a forecast: what each piece, stop and evening stored, and how long each piece took, becomes
 * what the tables say there too. What stays is how things change with speed and time.
 *
 * @param tables  changed in place
 * @param base    a forecast at the speeds given
 */
export function settle(tables: DayTables, along: Along, reach: Reach, base: DayForecast, speedMps: Float64Array): void {
  const { opensMs } = along.race.days[along.dayIndex]
  drivenOf(base, reach, opensMs).forEach((driven, i) => {
    if (driven?.isWhole !== true) return
    tables.extraS[i] = Math.max(
      driven.durationS - tables.lengthM[i] / speedMps[i],
      (-MOST_SAVED * tables.lengthM[i]) / speedMps[i],
    )
    const timeS = pieceS(tables, i, speedMps[i])
    const sunW = rowAt(tables.harvestW, i * tables.clock.count, tables.clock, driven.fromS + timeS / 2)
    const { W } = loadAt(tables, i, speedMps[i], { W: 0, slope: 0 })
    tables.extraJ[i] = storedW(tables.pack, sunW - W) * timeS - driven.storedJ - motionJ(tables, speedMps, i)
  })
  settleStands(tables, base, reach, opensMs)
  const end = base.steps.count - 1
  const last = base.timetable.spans.findLastIndex((span) => span.kind === 'drive' || span.kind === 'stop')
  if (last < 0 || base.timetable.isRoadLeft) return
  const lastStep = base.steps.span.lastIndexOf(last)
  const arrivedS = (base.steps.toMs[lastStep] - opensMs) / 1000
  const gainedJ = base.balance.storedJ[end] - base.balance.storedJ[lastStep]
  // A parked car draws on its pack until it may charge: that much more must be left on arrival.
  tables.floorJ[tables.pieces] += sinksJ(base.balance.storedJ, lastStep)
  if (base.balance.charge[end] < 1)
    shift(tables.duskGainJ, gainedJ - rowAt(tables.duskGainJ, 0, tables.clock, arrivedS))
}

/** How far a balance sinks below what it is after a step. [J] */
function sinksJ(storedJ: Float64Array, step: number): number {
  let least = storedJ[step]
  for (let i = step + 1; i < storedJ.length; i++) if (storedJ[i] < least) least = storedJ[i]
  return storedJ[step] - least
}

function shift(row: Float64Array, by: number): void {
  for (let k = 0; k < row.length; k++) row[k] += by
}

function drivenOf(base: DayForecast, reach: Reach, opensMs: number): (Driven | undefined)[] {
  const { steps, balance, timetable, openingJ } = base
  const { pieces } = base.road.course
  const all: (Driven | undefined)[] = Array.from({ length: reach.count })
  for (let i = 0; i < steps.count; i++) {
    if (timetable.spans[steps.span[i]].kind !== 'drive') continue
    const piece = steps.piece[i] - reach.first
    if (piece < 0 || piece >= reach.count) continue
    const endM = pieces.fromM[steps.piece[i]] + pieces.lengthM[steps.piece[i]]
    const driven = (all[piece] ??= {
      fromS: (steps.fromMs[i] - opensMs) / 1000,
      durationS: 0,
      storedJ: 0,
      isWhole: false,
    })
    driven.durationS += (steps.toMs[i] - steps.fromMs[i]) / 1000
    driven.storedJ += balance.storedJ[i] - (i > 0 ? balance.storedJ[i - 1] : openingJ)
    driven.isWhole = steps.toM[i] >= endM - 0.01
  }
  return all
}

function settleStands(tables: DayTables, base: DayForecast, reach: Reach, opensMs: number): void {
  const { steps, balance, timetable } = base
  timetable.spans.forEach((span, index) => {
    if (span.kind !== 'stop') return
    const first = steps.span.indexOf(index)
    if (first <= 0) return
    const stop = tables.stops.find(
      ({ beforePiece }) => beforePiece === base.road.course.stages[span.stage].endPiece - reach.first,
    )
    const last = steps.span.lastIndexOf(index)
    if (stop === undefined || balance.charge[last] >= 1) return
    const gainedJ = balance.storedJ[last] - balance.storedJ[first - 1]
    shift(stop.gainJ, gainedJ - rowAt(stop.gainJ, 0, tables.clock, (span.fromMs - opensMs) / 1000))
  })
}
