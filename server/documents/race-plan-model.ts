import { storedJ } from '../engine/battery.ts'
import type { Race } from '../engine/forecast.ts'
import { InputError } from '../engine/input-error.ts'
import { nightCost } from '../engine/planner/night-costs.ts'
import { planRace, type RaceDay } from '../engine/planner/plan-race.ts'
import type { RaceTask } from '../engine/planner/race-charges.ts'
import { skyCoverage } from '../engine/sky.ts'
import { ENGINE_VERSION } from '../engine/version.ts'
import { type DrivenDay, drivenRace } from './forecast.ts'
import { dayName, localIso } from './local-time.ts'
import { zoneOf } from './race-model.ts'
import type { RaceDocument } from './race.ts'
import type { RacePlanDay, RacePlanDocument } from './race-plan.ts'
import { type PlannedDay, racePlanDay } from './race-plan-day.ts'
import type { RacePlanRequest } from './race-plan-request.ts'
import { raceText } from './race-plan-words.ts'
import { coverageNotes, isCovered } from './sky-model.ts'

const WH = 1 / 3600
/** A speed to lay the race out with before it is planned. */
const QUICK = { kind: 'constant' as const, speedKmh: 70 }
/** How the work is divided: the days' plans, then what the nights cost, then the ranges. */
const PLANNED_SHARE = 0.6
const COSTED_SHARE = 0.9

type Tell = (progress: { step: string; share: number }) => void

/**
 * The plan of a race: all its days together, so that the nights between them close with what serves the whole.
 *
 * @throws InputError when the documents do not fit together: field, value and what was expected
 */
export function racePlanDocuments(request: RacePlanRequest, tell: Tell = () => {}): RacePlanDocument {
  tell({ step: 'Laying out the race', share: 0 })
  const { first, task, assumptions } = layOut(request)
  const count = task.race.days.length - task.dayIndex
  tell({ step: 'Looking for the best nights', share: 0.02 })
  let done = 0
  const planned = planRace(task, () => {
    done++
    tell({ step: `${done} of ${count} days planned`, share: (PLANNED_SHARE * (done + 1)) / (count + 2) })
  })
  const costs = costsOf(request, task, planned.days, tell)
  tell({ step: 'Drawing days that differ', share: COSTED_SHARE })
  const days = planned.days.map((day, i) => {
    const d = task.dayIndex + i
    const opening = i === 0 ? task.opening : planned.days[i - 1].closing
    const next = planned.days.slice(i + 1).find(({ isParked }) => !isParked)?.plan ?? null
    const of: PlannedDay = { day, opening, next, target: planned.targets[d], cost: costs[i] }
    return racePlanDay(request, dayOf(request, first, task.race, d), of)
  })
  return { ...headOf(request, task.race), assumptions, ...wholeOf(days, planned.days) }
}

function headOf({ race, car }: RacePlanRequest, { car: model }: Race) {
  const { pack, reserveCharge } = model
  return {
    engineVersion: ENGINE_VERSION,
    race: race.name,
    car: car.name,
    zone: race.zone,
    capacityWh: storedJ(pack, 1) * WH,
    reserve: { wh: storedJ(pack, reserveCharge) * WH, chargePct: reserveCharge * 100 },
  }
}

function wholeOf(days: RacePlanDay[], planned: RaceDay[]) {
  const drivingMin = days.reduce((sum, { road }) => sum + (road?.drivingMin ?? 0), 0)
  const bestMin = days.reduce((sum, { road }) => sum + (road?.bestMin ?? 0), 0)
  const isImpossible = planned.some(({ plan: made, isParked }) => made === null && !isParked)
  const isUnfinished = days[days.length - 1].state === 'camp'
  const kind = isImpossible ? ('impossible' as const) : isUnfinished ? ('unfinished' as const) : ('planned' as const)
  return { outcome: { kind, text: raceText({ days, drivingMin }, kind) }, drivingMin, bestMin, days }
}

/** What each given closing charge costs, by planned day; null where it is free or not known. */
function costsOf({ race }: RacePlanRequest, task: RaceTask, days: RaceDay[], tell: Tell) {
  return days.map((_, i) => {
    const d = task.dayIndex + i
    if (Number.isNaN(task.targetCharge[d])) return null
    const share = PLANNED_SHARE + ((COSTED_SHARE - PLANNED_SHARE) * i) / days.length
    tell({ step: `Weighing the close of ${dayName(race.days[d].date)}`, share })
    return nightCost(task, days, d)
  })
}

/** The race in the engine's terms up to the last day wanted, and what is wanted of its nights. */
function layOut(request: RacePlanRequest): { first: DrivenDay; task: RaceTask; assumptions: string[] } {
  const { race: document, fromDate, toDate, from, openingPct } = request
  if (openingPct !== undefined && from !== undefined)
    throw new InputError('out-of-range', 'openingPct', `${openingPct} given; expected none where from tells the charge`)
  const lastDay = toDate === undefined ? document.days.length - 1 : indexOf(request, toDate, 'toDate')
  const date = fromDate ?? (from === undefined ? document.days[0].date : undefined)
  const given = date === undefined ? document : opened(request, indexOf(request, date, 'fromDate'))
  const { days, assumptions } = drivenRace({ ...request, race: given, speeds: QUICK, date }, (day) => day)
  const first = days[0]
  if (lastDay < first.dayIndex)
    throw new InputError('out-of-range', 'toDate', `${toDate} given; expected ${first.date}, the first day, or later`)
  const race = { ...first.race, days: first.race.days.slice(0, lastDay + 1) }
  const dayIndex = first.dayIndex
  const notes = race.days.flatMap((_, d) =>
    d > dayIndex ? [...skyNotes(request, race, d), ...measuredNotes(request, d)] : [],
  )
  const task = { race, dayIndex, opening: first.opening, targetCharge: wantedOf(request, dayIndex, lastDay) }
  return { first, task, assumptions: [...new Set([...assumptions, ...notes])] }
}

/** The race with the charge that the order gives as measured on the first planned day. */
function opened({ race, openingPct }: RacePlanRequest, dayIndex: number): RaceDocument {
  if (openingPct === undefined) return race
  const days = race.days.map((day, d) => {
    if (d !== dayIndex) return day
    const { openingRestV: _volts, openingRestMin: _rest, openingMeterPct: _meter, ...rest } = day
    return { ...rest, openingPct }
  })
  return { ...race, days }
}

/** Where the sky does not reach so far, the days may still be planned up to the last that it reaches. */
function skyNotes({ race: document }: RacePlanRequest, { sky, days }: Race, d: number): string[] {
  const zone = zoneOf(document, d)
  if (isCovered(sky, days[d])) return coverageNotes(sky, days[d], zone)
  const until = localIso(skyCoverage(sky).toMs, zone)
  throw new InputError(
    'sky-too-short',
    'sky.places',
    `the sky ends ${until}; expected one that covers ${dayName(document.days[d].date)} too, or ${document.days[d - 1].date} as the last day to plan`,
  )
}

/** A later day's measured charge is of a day that has been; a plan carries its own over the night. */
function measuredNotes({ race: { days } }: RacePlanRequest, d: number): string[] {
  const { date, openingPct, openingRestV } = days[d]
  if (openingPct === undefined && openingRestV === undefined) return []
  return [`The charge measured on ${dayName(date)} is not used: that day opens with what the night before leaves.`]
}

/** Wanted closing charge by day, NaN where it is free. */
function wantedOf(request: RacePlanRequest, firstDay: number, lastDay: number): number[] {
  const wanted = request.race.days
    .slice(0, lastDay + 1)
    .map(({ targetPct }) => (targetPct === undefined ? Number.NaN : targetPct / 100))
  request.nights.forEach((night, i) => {
    const field = `nights[${i}].date`
    const d = indexOf(request, night.date, field)
    if (d < firstDay || d > lastDay)
      throw new InputError('out-of-range', field, `${night.date} given; expected one of the days that are planned`)
    wanted[d] = night.kind === 'free' ? Number.NaN : night.chargePct / 100
  })
  return wanted
}

function indexOf({ race }: RacePlanRequest, date: string, field: string): number {
  const dates = race.days.map((day) => day.date)
  const d = dates.indexOf(date)
  if (d >= 0) return d
  throw new InputError('unknown-date', field, `${date} given; expected a day of the race (${dates.join(', ')})`)
}

const dayOf = ({ race: document }: RacePlanRequest, first: DrivenDay, race: Race, d: number): DrivenDay => ({
  ...first,
  race,
  dayIndex: d,
  date: document.days[d].date,
  zone: zoneOf(document, d),
})
