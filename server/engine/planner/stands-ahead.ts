import { openCircuitV } from '../battery.ts'
import type { DayRules, StopRule } from '../day-rules.ts'
import type { Axis, TablePack, TableStop } from './day-tables.ts'
import type { Along, Reach } from './engine-tables.ts'
import { eveningGainJ, parkedSun, stopGainJ } from './standing-gain.ts'

/** The day's stops by instant of arrival. */
export function stopsOf(along: Along, reach: Reach, clock: Axis, pack: TablePack): TableStop[] {
  const { race, dayIndex, path, base } = along
  const day = race.days[dayIndex]
  const packV = openCircuitV(race.car.pack, base.openingCharge)
  const hoursEndS = (day.drivingToMs - day.opensMs) / 1000
  return race.course.stages.flatMap(({ endPiece }, s) => {
    const rule = race.stages[s].stop
    const beforePiece = endPiece - reach.first
    if (rule === null || beforePiece <= 0 || beforePiece > reach.count) return []
    const place = { piece: endPiece - 1, isAtEnd: true, horizon: rule.horizon }
    const sun = parkedSun(race, path, place, { clock, opensMs: day.opensMs, pack, packV })
    const isLast = beforePiece === reach.count
    const lengthS = new Float64Array(clock.count)
    const gainJ = new Float64Array(clock.count)
    for (let k = 0; k < clock.count; k++) {
      const arrivalS = clock.from + k * clock.step
      lengthS[k] = stopLengthS(rule, day, dayIndex, arrivalS)
      // What the driving hours leave of the day's last stop is held the next morning.
      if (isLast) lengthS[k] = Math.min(lengthS[k], Math.max(hoursEndS - arrivalS, 0))
      gainJ[k] = stopGainJ(sun, rule, arrivalS, lengthS[k])
    }
    const closesMs = rule.closesMs[dayIndex]
    const ownS = Number.isNaN(closesMs) ? Number.POSITIVE_INFINITY : (closesMs - day.opensMs) / 1000
    return [{ beforePiece, lengthS, gainJ, closesS: isLast ? Math.min(ownS, hoursEndS) : ownS }]
  })
}

/** Whether a stop is at the end of the day's road. */
export const isAtEnd =
  ({ count }: Reach) =>
  ({ beforePiece }: TableStop): boolean =>
    beforePiece === count

/** From arrival to departure, as the timetable has it. [S] */
function stopLengthS(rule: StopRule, day: DayRules, dayIndex: number, arrivalS: number): number {
  const opensMs = rule.opensMs[dayIndex]
  const earlyS = Number.isNaN(opensMs) ? 0 : Math.max((opensMs - day.opensMs) / 1000 - arrivalS, 0)
  return rule.runsFromOpening ? earlyS + rule.lengthS : Math.max(earlyS, rule.lengthS)
}

/** What the pack gains from an arrival at the end until dusk, by instant of arrival. [J] (clock) */
export function evening(along: Along, reach: Reach, clock: Axis, pack: TablePack): Float64Array {
  const { race, dayIndex, path, base } = along
  const day = race.days[dayIndex]
  if (reach.count === 0) return new Float64Array(clock.count)
  const packV = openCircuitV(race.car.pack, base.openingCharge)
  const place = { piece: reach.first + reach.count - 1, isAtEnd: true }
  const of = { clock, opensMs: day.opensMs, pack, packV }
  const open = parkedSun(race, path, place, of)
  const suns = day.charging.map(({ horizon }) =>
    horizon === undefined ? open : parkedSun(race, path, { ...place, horizon }, of),
  )
  return Float64Array.from({ length: clock.count }, (_, k) =>
    eveningGainJ(suns.length > 0 ? suns : [open], day, clock.from + k * clock.step),
  )
}
