import type { DayBudget } from './budget.ts'
import { dayKm, placeName } from './budget-day.ts'
import type { ForecastDay } from './budget-day.ts'
import { clockThere, spanZones } from './day-zones.ts'
import { localIso } from './local-time.ts'

type Outcome = DayBudget['outcome']
interface Figures {
  closing: DayBudget['closing']
  lowest: DayBudget['lowest']
  reserve: DayBudget['reserve']
  target: DayBudget['target']
}

/** How a day ends, worst news first: what it is called and one sentence that says it. */
export function outcomeOf(day: ForecastDay, figures: Figures): Outcome {
  return (
    runsFlat(day) ??
    tooSteep(day) ??
    noSpeed(day, figures) ??
    stopMissed(day) ??
    belowReserve(figures) ??
    cutOff(day) ??
    arrived(day)
  )
}

function runsFlat(day: ForecastDay): Outcome | null {
  const { balance, steps } = day.forecast
  const i = balance.firstShort
  if (i < 0) return null
  const place = placeName(day, steps.fromM[i])
  const what = whyShort(balance)
  const zone = spanZones(day)[steps.span[i]].start
  const text = `${what} at ${place}, ${clockThere(day, steps.fromMs[i], zone)}.`
  return { kind: 'runs-flat', text, at: localIso(steps.fromMs[i], zone), km: dayKm(day, steps.fromM[i]) }
}

/** What keeps the pack from giving what is asked. */
function whyShort({ firstShort, firstShortLimit, charge }: ForecastDay['forecast']['balance']): string {
  switch (firstShortLimit) {
    case 'weakest-cell':
      return 'The weakest cell is empty'
    case 'too-cold-to-discharge':
      return 'The pack is too cold to give the power asked of it'
    case 'too-hot-to-discharge':
      return 'The pack is too hot to give the power asked of it'
    default:
      return charge[firstShort] < 0.005 ? 'The pack runs flat' : 'The pack cannot give the power asked of it'
  }
}

function tooSteep(day: ForecastDay): Outcome | null {
  const { blockedPiece, timetable } = day.forecast
  if (blockedPiece < 0) return null
  const km = dayKm(day, timetable.evening.placeM)
  const gradePct = (Math.tan(day.race.course.pieces.gradeRad[blockedPiece]) * 100).toFixed(1)
  const text = `The motor cannot pull the car on at km ${km.toFixed(1)}: the grade there is ${gradePct} %.`
  const last = timetable.spans.findLastIndex((s) => s.kind === 'drive' || s.kind === 'stop')
  const atMs = timetable.spans[last]?.toMs ?? day.race.days[day.dayIndex].drivingFromMs
  return { kind: 'too-steep', text, at: localIso(atMs, spanZones(day)[last]?.end ?? day.zone), km }
}

function noSpeed(day: ForecastDay, { closing, target, reserve, lowest }: Figures): Outcome | null {
  if (day.search === null || day.search.meetsTarget) return null
  const wanted = target ?? reserve
  const short = Math.max(wanted.wh - closing.wh, reserve.wh - lowest.wh)
  const miss = short > 0 ? `${Math.round(short)} Wh short` : 'late at a stop'
  const text = `No speed meets the day’s target. Closest: ${day.heldKmh} km/h, ${miss}.`
  return { kind: 'no-speed-meets-target', text, at: lowest.at, km: lowest.km }
}

function stopMissed(day: ForecastDay): Outcome | null {
  const { late } = day.forecast.timetable
  const missed = late.find((l) => l.byS / 60 > (day.penalties.mostLateMin ?? day.penalties.lateFreeMin))
  if (missed === undefined) return null
  const { finish } = day.race.stages[missed.stage]
  const zone = day.stages[missed.stage].stage.stop?.zone ?? day.zone
  const text = `${finish} is reached ${clockThere(day, missed.atMs, zone)}, ${Math.ceil(missed.byS / 60)} min after it closes.`
  const km = dayKm(day, day.race.course.stages[missed.stage].toM)
  return { kind: 'stop-missed', text, at: localIso(missed.atMs, zone), km }
}

function belowReserve({ lowest, reserve }: Figures): Outcome | null {
  if (lowest.wh >= reserve.wh) return null
  const text = `The balance falls ${Math.round(reserve.wh - lowest.wh)} Wh below the reserve at ${lowest.place}.`
  return { kind: 'below-reserve', text, at: lowest.at, km: lowest.km }
}

function cutOff(day: ForecastDay): Outcome | null {
  const { timetable } = day.forecast
  if (!timetable.isCutOff) return null
  const { stopLeftS, placeM, stage } = timetable.evening
  const km = dayKm(day, placeM)
  const at = localIso(day.race.days[day.dayIndex].drivingToMs, day.zone)
  if (stopLeftS > 0) {
    const isLast = day.dayIndex === day.race.days.length - 1
    const left = `${Math.ceil(stopLeftS / 60)} min of it are left${isLast ? '' : ' for the next day'}`
    const text = `The driving hours end in the stop at ${placeName(day, placeM)}; ${left}.`
    return { kind: 'cut-off', text, at, km }
  }
  const leftKm = (day.race.course.stages[stage].toM - placeM) / 1000
  const text = `The driving hours end at km ${km.toFixed(0)}, ${leftKm.toFixed(0)} km before ${day.race.stages[stage].finish}.`
  return { kind: 'cut-off', text, at, km }
}

function arrived(day: ForecastDay): Outcome {
  const { spans } = day.forecast.timetable
  const index = spans.findLastIndex((s) => s.kind === 'drive')
  if (index < 0) return { kind: 'parked', text: 'The car is not driven on this day.', at: null, km: null }
  const last = spans[index]
  const zone = spanZones(day)[index].end
  const text = `${placeName(day, last.toM)} is reached ${clockThere(day, last.toMs, zone)}.`
  return { kind: 'done', text, at: localIso(last.toMs, zone), km: dayKm(day, last.toM) }
}
