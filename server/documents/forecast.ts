import { z } from 'zod'
import { forecastDay } from '../engine/forecast.ts'
import type { DayForecast, Opening, Race } from '../engine/forecast.ts'
import { InputError } from '../engine/input-error.ts'
import { geodesicM } from '../engine/route.ts'
import { fastestThatMeets } from '../engine/search.ts'
import { ENGINE_VERSION } from '../engine/version.ts'
import type { BudgetDocument } from './budget.ts'
import { dayBudget, type ForecastDay } from './budget-day.ts'
import { carDocument } from './car.ts'
import { carModel } from './car-model.ts'
import { fieldName } from './check.ts'
import { horizonNotes, rackNotes } from './forecast-notes.ts'
import { campDocument, hereDocument } from './here.ts'
import { type Begun, begunDay, campedDay } from './here-model.ts'
import { learnedLosses } from './learned.ts'
import { date, slug } from './quantity.ts'
import { measuredCharge, measuredWarmth } from './opening-model.ts'
import { dayRules, placedStages, raceCourse, stageRules, zoneOf } from './race-model.ts'
import type { PlacedStage } from './race-model.ts'
import { raceDocument } from './race.ts'
import type { Measured, RaceDocument } from './race.ts'
import { routeDocument } from './route.ts'
import { skyDocument } from './sky.ts'
import { coverageNotes, isCovered, skyModel } from './sky-model.ts'
import { sectionCutsKm, wantedMps } from './speeds-model.ts'
import { speedsDocument } from './speeds.ts'

/** Everything a forecast needs, as whole documents. */
export const forecastRequest = z
  .strictObject({
    car: carDocument,
    race: raceDocument,
    routes: z.record(slug('id of a route that a stage names'), routeDocument),
    sky: skyDocument,
    speeds: speedsDocument,
    date: date(
      'the one day wanted; the days before it are driven at the fastest speed that meets their targets',
    ).optional(),
    from: hereDocument
      .describe('where the car is in the middle of a day, to go on from there; the days before are left out')
      .optional(),
    until: campDocument.describe('where the car is parked on the last day wanted, before its hours end').optional(),
    learned: learnedLosses
      .describe('losses by tracker as its readings show them, in place of the car’s own')
      .optional(),
  })
  .meta({ title: 'Forecast request' })

export type ForecastRequest = z.output<typeof forecastRequest>

/**
 * The budget of a race, day by day.
 *
 * @throws InputError when the documents do not fit together: field, value and what was expected
 */
export function forecastDocuments(request: ForecastRequest): BudgetDocument {
  const { car, race: document, sky: skyDoc } = request
  const { race, days, assumptions } = drivenRace(request, dayBudget)
  return {
    engineVersion: ENGINE_VERSION,
    race: document.name,
    car: car.name,
    sky: { name: skyDoc.name, source: skyDoc.source, issuedAt: skyDoc.issuedAt },
    assumptions,
    lengthKm: race.course.lengthM / 1000,
    days,
  }
}

/** A day as it is driven, with all that it takes to drive it again. */
export interface DrivenDay extends ForecastDay {
  opening: Opening
  /** Speed wanted on each piece; limits and the motor may lower it. [Mps] (pieces) */
  wantedMps: Float64Array
}

/**
 * The race in the engine's terms and what is wanted of its days, one after the other as they are driven.
 *
 * @param opened  how the last day wanted opens, where that is known: the days before are then left out
 * @throws InputError when the documents do not fit together: field, value and what was expected
 */
export function drivenRace<T>(
  request: ForecastRequest,
  of: (day: DrivenDay) => T,
  opened?: Opening,
): { race: Race; days: T[]; assumptions: string[] } {
  const { car, race: document, sky: skyDoc } = request
  const lastDay = dayWanted(document, request.date)
  const { sky, assumptions } = skyModel(skyDoc, document.turbidityByMonth)
  const course = raceCourse(document, request.routes, cutsKm(request))
  const model = carModel(
    car,
    { groundAlbedo: meanAlbedo(request), skyModel: skyDoc.diffuse ?? 'perez' },
    request.learned,
  )
  checkWindHeight(request)
  const whole: Race = { car: model, course, stages: stageRules(document), days: dayRules(document), sky }
  const asFar = request.until === undefined ? whole : campedDay(whole, document, request.until, lastDay)
  const begun = begunOf(asFar, request, lastDay, opened)
  const race = begun?.race ?? asFar
  const { days, notes } = drivenDays(race, request, lastDay, { begun, of })
  return {
    race,
    days,
    assumptions: [
      ...new Set([
        ...roadNotes(request),
        ...learnedNotes(request),
        ...gapNotes(race),
        ...rackNotes(car),
        ...horizonNotes(document),
        ...assumptions,
        ...notes,
      ]),
    ],
  }
}

/** A day that is not opened by the one before: the race from there on; null where the days before are driven. */
function begunOf(race: Race, { race: document, from, date: on }: ForecastRequest, lastDay: number, opened?: Opening) {
  if (from !== undefined) return begunDay(race, document, from, on)
  return opened === undefined ? null : { race, dayIndex: lastDay, opening: opened }
}

/** How the days before the one wanted are driven: a try on Saturday does not change Friday. */
const AS_TARGETED = speedsDocument.parse({ kind: 'meet-target' })

/** The charge that a plan of a day is to close with: asked for, else the race's, else the reserve. 0..1 */
export const wantedCharge = (
  { targetCharge, race }: Pick<DrivenDay, 'targetCharge' | 'race'>,
  askedPct: number | undefined,
): number => (askedPct === undefined ? (targetCharge ?? race.car.reserveCharge) : askedPct / 100)

/** The days up to the last wanted, each opening where the one before closed; one alone where one was asked for. */
function drivenDays<T>(
  race: Race,
  request: ForecastRequest,
  lastDay: number,
  { begun, of }: { begun: Begun | null; of: (day: DrivenDay) => T },
) {
  const { race: document } = request
  const stages = placedStages(document)
  const days: T[] = []
  const first = begun?.dayIndex ?? firstDay(race, document, lastDay)
  const isSkipped = first > 0 && begun === null
  const notes = isSkipped ? ['The sky does not reach the days before: their stages are taken as driven.'] : []
  let opening = begun?.opening ?? openingOf(race, stages, first)
  for (let d = first; d <= lastDay; d++) {
    const { date: on, targetPct } = document.days[d]
    if (d !== begun?.dayIndex) opening = asOpened(race, document, { opening, dayIndex: d }, notes)
    const zone = zoneOf(document, d)
    notes.push(...coverageNotes(race.sky, race.days[d], zone))
    const isBefore = request.date !== undefined && d < lastDay
    const speeds = isBefore ? AS_TARGETED : request.speeds
    const driven = driveDay(race, document, { dayIndex: d, opening, speeds, stages })
    const opened = opening
    opening = driven.forecast.closing
    if (isBefore) continue
    const targetCharge = targetPct === undefined ? null : targetPct / 100
    const { penalties } = document
    days.push(of({ race, stages, dayIndex: d, date: on, zone, targetCharge, penalties, opening: opened, ...driven }))
  }
  return { days, notes }
}

/** A day's opening with what the race and the day say was measured then. */
function asOpened(race: Race, document: RaceDocument, day: { opening: Opening; dayIndex: number }, notes: string[]) {
  const { dayIndex } = day
  const first = { dayIndex, measured: document, field: 'race' }
  const opening = dayIndex === 0 ? asMeasured(race, day.opening, first, notes) : day.opening
  const field = fieldName(['race', 'days', dayIndex])
  return asMeasured(race, opening, { dayIndex, measured: document.days[dayIndex], field }, notes)
}

/** Places inside stages at which pieces of road must end. [km] */
function cutsKm({ speeds, until }: ForecastRequest): (stage: string) => number[] {
  const sections = sectionCutsKm(speeds)
  return (stage) => (until?.stage === stage ? [...sections(stage), until.km] : sections(stage))
}

/** The first day to work out: the race's first, or one with a measured charge after days that the sky does not reach. */
function firstDay({ sky, days }: Race, document: RaceDocument, lastDay: number): number {
  const gap = days.slice(0, lastDay).findLastIndex((day) => !isCovered(sky, day))
  const first = document.days.findIndex((day, d) => d > gap && d <= lastDay && isMeasured(day))
  return gap >= 0 && first > 0 ? first : 0
}

const isMeasured = ({ openingPct, openingRestV }: Measured): boolean =>
  openingPct !== undefined || openingRestV !== undefined

/** An opening with what was measured in place of what the day before left. */
function asMeasured(
  { car, days }: Race,
  opening: Opening,
  { dayIndex, measured, field }: { dayIndex: number; measured: Measured; field: string },
  notes: string[],
): Opening {
  const found = measuredCharge(car.pack, measured, field)
  const warmth = measuredWarmth(measured, days[dayIndex].opensMs)
  if (warmth !== undefined && car.pack.heat === undefined)
    notes.push(
      'The pack is taken as warm as the air: the car gives no heat for it, so a measured temperature is not used.',
    )
  if (found !== null) notes.push(...found.notes)
  return {
    ...opening,
    ...(found === null ? {} : { charge: found.charge }),
    ...(warmth === undefined ? {} : { warmth }),
  }
}

/** The car at the start of the first stage that a day may start, its pack empty until its charge is known. */
function openingOf(race: Race, stages: PlacedStage[], day: number): Opening {
  const next = stages.findIndex((s) => s.dayIndex >= day)
  const stage = next < 0 ? stages.length : next
  const placeM = next < 0 ? race.course.lengthM : race.course.stages[next].fromM
  return { standing: { stage, placeM, stopLeftS: 0 }, charge: 0 }
}

function dayWanted(race: RaceDocument, wanted: string | undefined): number {
  if (wanted === undefined) return race.days.length - 1
  const index = race.days.findIndex((day) => day.date === wanted)
  if (index >= 0) return index
  throw new InputError(
    'unknown-date',
    'date',
    `${wanted} given; expected a day of the race (${race.days.map((day) => day.date).join(', ')})`,
  )
}

interface Driven {
  forecast: DayForecast
  heldKmh: number | null
  search: { tried: number; meetsTarget: boolean } | null
  wantedMps: Float64Array
}

/** One day at the speeds given, or at the fastest that meets its target. */
function driveDay(
  race: Race,
  document: RaceDocument,
  day: { dayIndex: number; opening: Opening; speeds: ForecastRequest['speeds']; stages: PlacedStage[] },
): Driven {
  const { dayIndex, opening, speeds, stages } = day
  const isDrivingDay = stages.some((s, i) => s.dayIndex <= dayIndex && i >= opening.standing.stage)
  if (speeds.kind === 'meet-target' && isDrivingDay) {
    const targetPct = document.days[dayIndex].targetPct
    const target = targetPct === undefined ? race.car.reserveCharge : targetPct / 100
    const { speedKmh, forecast, tried, meetsTarget } = fastestThatMeets(race, dayIndex, opening, target, speeds)
    const wanted = new Float64Array(race.course.pieces.count).fill(speedKmh / 3.6)
    return { forecast, heldKmh: speedKmh, search: { tried, meetsTarget }, wantedMps: wanted }
  }
  const given = speeds.kind === 'meet-target' ? { kind: 'constant' as const, speedKmh: speeds.lowestKmh } : speeds
  const dates = document.days.map((d) => d.date)
  const wanted = wantedMps(given, race.course, stages, { date: dates[dayIndex], dates })
  const heldKmh = given.kind === 'constant' && isDrivingDay ? given.speedKmh : null
  return { forecast: forecastDay(race, dayIndex, opening, wanted), heldKmh, search: null, wantedMps: wanted }
}

/** One ground for the whole race: the mean over the routes that its stages use. */
function meanAlbedo({ race, routes }: ForecastRequest): number {
  const used = placedStages(race).flatMap(({ stage }) =>
    Object.hasOwn(routes, stage.route) ? [routes[stage.route]] : [],
  )
  return used.reduce((sum, route) => sum + route.groundAlbedo, 0) / Math.max(used.length, 1)
}

function roadNotes({ race, routes }: ForecastRequest): string[] {
  const used = [...new Set(placedStages(race).map(({ stage }) => stage.route))]
  const flat = used.filter((id) => routes[id].points.elevationM === undefined)
  const albedos = new Set(used.map((id) => routes[id].groundAlbedo))
  return [
    ...flat.map((id) => `${routes[id].name} has no heights: a level road at sea level is assumed.`),
    ...(albedos.size > 1 ? ['The routes lie in ground of different brightness: its mean is assumed for all.'] : []),
  ]
}

function learnedNotes({ learned = {} }: ForecastRequest): string[] {
  const names = Object.keys(learned)
  return names.length === 0 ? [] : [`Losses are as the readings show them: ${names.join(', ')}.`]
}

/** Ends of roads nearer than this are taken for the same place. [M] */
const SAME_PLACE_M = 2000

/** Stages whose roads do not meet: the car is taken to be brought over. */
function gapNotes({ course, stages }: Race): string[] {
  const { latRad, lonRad, lengthM } = course.pieces
  return course.stages.flatMap(({ firstPiece: to }, s) => {
    if (s === 0) return []
    const from = to - 1
    const apartM = geodesicM(latRad[from], lonRad[from], latRad[to], lonRad[to]) - (lengthM[from] + lengthM[to]) / 2
    if (apartM < SAME_PLACE_M) return []
    const km = (apartM / 1000).toFixed(0)
    return [`${stages[s].name} starts ${km} km from the end of ${stages[s - 1].name}: the car is brought there.`]
  })
}

function checkWindHeight({ car, race, routes }: ForecastRequest): void {
  for (const { stage } of placedStages(race))
    if (routes[stage.route].roughnessM >= car.body.windHeightM)
      throw new InputError(
        'out-of-range',
        fieldName(['routes', stage.route, 'roughnessM']),
        `${routes[stage.route].roughnessM} given; expected less than the car's windHeightM (${car.body.windHeightM})`,
      )
}
