import { arrayHarvest } from './array.ts'
import type { ArraySteps } from './array.ts'
import { balance } from './balance.ts'
import type { Balance, Car } from './balance.ts'
import { SHEET_C, storedJ } from './battery.ts'
import type { Course } from './course.ts'
import type { DayRules, StageRule, Standing } from './day-rules.ts'
import { CRAWL_MPS, drivenRoad } from './driven-road.ts'
import type { DrivenRoad } from './driven-road.ts'
import { idleC } from './pack-heat.ts'
import type { Warmth } from './pack-heat.ts'
import type { HorizonsAlong } from './horizon.ts'
import { airAtCar, meetWeather } from './motion.ts'
import type { Air } from './motion.ts'
import { holdsAlong } from './pointing.ts'
import { weatherAlong } from './sky.ts'
import type { Sky, Weather } from './sky.ts'
import { steps } from './steps.ts'
import type { Steps } from './steps.ts'
import { sunPath } from './sun.ts'
import type { SunPath } from './sun.ts'
import { timetable } from './timetable.ts'
import type { Span, Timetable } from './timetable.ts'

/** Everything that stays the same from day to day. */
export interface Race {
  car: Car
  course: Course
  stages: StageRule[]
  days: DayRules[]
  sky: Sky
}

/** Where the car stands and what its pack holds when a day opens. */
export interface Opening {
  standing: Standing
  /** Usable charge, 0..1. */
  charge: number
  /** The pack's temperature when it was last known; as warm as the air where left out. */
  warmth?: Warmth
}

/** What one day is expected to bring and cost. */
export interface DayForecast {
  openingCharge: number
  openingJ: number
  /** The pack's temperature when the day opens. [C] */
  openingPackC: number
  timetable: Timetable
  /** The road with the air met on it and the speeds held. */
  road: DrivenRoad
  steps: Steps
  weather: Weather
  air: Air
  aim: { tiltRad: Float64Array; azimuthRad: Float64Array }
  /** Warmest panel in each step. [C] */
  cellC: Float64Array
  balance: Balance
  closing: Opening
  closingJ: number
  /** Step at whose end the pack holds least; -1 when it never holds less than at the opening. */
  lowestStep: number
  /** Piece that the motor cannot climb, where the day ended on one; -1 otherwise. */
  blockedPiece: number
}

/** Rounds of laying the day out anew after the weather changed what the motor can hold; the weather then shifts by seconds. */
const MOTOR_ROUNDS = 3

/**
 * The main path: speeds → timetable → steps → sky → harvest → balance, for one day.
 *
 * @param race       car, course, stages, days and sky
 * @param dayIndex   which day
 * @param opening    where the car stands, its charge and how warm its pack was last
 * @param wantedMps  speed wanted on each piece; limits and the motor may lower it. [Mps] (pieces)
 * @param path       the sun over that day, where the caller has it already
 */
export function forecastDay(
  race: Race,
  dayIndex: number,
  opening: Opening,
  wantedMps: Float64Array,
  path: SunPath = daySun(race.days[dayIndex]),
): DayForecast {
  const { car } = race
  const road = drivenRoad(car, race.course, wantedMps)
  let laid = layOut(race, dayIndex, opening.standing, road, path)
  for (let round = 0; round < MOTOR_ROUNDS && meetWeather(road, laid.steps, laid.air); round++)
    laid = layOut(race, dayIndex, opening.standing, road, path)
  const harvest = arrayHarvest(car.array, arraySteps(car, laid, laid.timetable.spans))
  const packC = openingC(car, opening.warmth, laid)
  const energy = balance(car, { ...laid, spans: laid.timetable.spans, harvest }, { charge: opening.charge, packC })
  const closing = closingOf(laid, energy, opening.charge)
  return {
    openingCharge: opening.charge,
    openingJ: storedJ(car.pack, opening.charge),
    openingPackC: packC,
    timetable: laid.timetable,
    road,
    steps: laid.steps,
    weather: laid.weather,
    air: laid.air,
    aim: { tiltRad: harvest.aimTiltRad, azimuthRad: harvest.aimAzimuthRad },
    cellC: warmest(harvest.cellC, laid.steps.count),
    balance: energy,
    closing,
    closingJ: storedJ(car.pack, closing.charge),
    lowestStep: lowestStep(energy.storedJ, storedJ(car.pack, opening.charge)),
    blockedPiece: blockedPiece(road, laid),
  }
}

/** The pack after the night: it goes towards the air as the day opens. */
function openingC({ pack }: Car, warmth: Warmth | undefined, { steps, weather }: Laid): number {
  if (steps.count === 0) return warmth?.packC ?? SHEET_C
  const now = { airC: weather.airC[0], atMs: steps.fromMs[0] }
  return warmth === undefined || pack.heat === undefined ? now.airC : idleC(pack.heat, warmth, now)
}

function closingOf({ steps, timetable: table, weather }: Laid, energy: Balance, openingCharge: number): Opening {
  const last = steps.count - 1
  if (last < 0) return { standing: table.evening, charge: openingCharge }
  const warmth = { packC: energy.packC[last], airC: weather.airC[last], atMs: steps.toMs[last] }
  return { standing: table.evening, charge: energy.charge[last], warmth }
}

/**
 * Steps of a day as the array needs them.
 *
 * @param spans  of the day, which tell what stands around the parked car; left out, nothing
 */
export function arraySteps(
  { array }: Car,
  laid: Omit<Laid, 'timetable'>,
  spans: Pick<Span, 'horizon'>[] = [],
): ArraySteps {
  const { steps, weather, air } = laid
  const { headingRad, gradeRad, lifted } = steps
  const reaimS = array.model.stand?.reaimS ?? 0
  return {
    weather,
    headingRad,
    gradeRad,
    airSpeedMps: air.overPanelsMps,
    lifted,
    durationS: durationsS(steps),
    overPanelsC: airOverPanelsC(laid),
    horizons: horizonsAlong(spans, steps),
    ...(reaimS > 0 ? { hold: holdsAlong(steps, reaimS) } : {}),
  }
}

/** The sun over a day, to be shared by all forecasts of that day. */
export const daySun = (day: DayRules): SunPath => sunPath(day.opensMs, day.closesMs)

interface Laid {
  course: Course
  timetable: Timetable
  steps: Steps
  weather: Weather
  air: Air
}

/** Timetable, steps, weather and air at given speeds. */
function layOut(race: Race, dayIndex: number, standing: Standing, road: DrivenRoad, path: SunPath): Laid {
  const { course } = race
  const table = timetable(road, race.stages, race.days[dayIndex], { dayIndex, standing })
  const cut = steps(course, table, race.car.array.model.stand?.reaimS)
  if (race.car.array.model.stand === null) cut.lifted.fill(0)
  const weather = weatherAlong(race.sky, path, cut)
  return { course, timetable: table, steps: cut, weather, air: airAtCar(course, cut, weather, race.car.windHeightM) }
}

const durationsS = ({ fromMs, toMs }: Steps): Float64Array => toMs.map((to, i) => (to - fromMs[i]) / 1000)

/** What stands around the parked car, where any span of the day tells of it. */
const horizonsAlong = (spans: Pick<Span, 'horizon'>[], { span }: Steps): HorizonsAlong | undefined =>
  spans.some(({ horizon }) => horizon !== undefined)
    ? { of: spans.map(({ horizon }) => horizon ?? null), at: span }
    : undefined

/** Air over the panels where a road warms it in proportion to the global light. [°C] (steps) */
function airOverPanelsC({ course, steps, weather }: Omit<Laid, 'timetable'>): Float64Array {
  const { roadHeatC } = course
  return weather.airC.map((airC, i) => airC + roadHeatC[steps.piece[i]] * (weather.ghiWm2[i] / 1000))
}

function warmest(panels: Float64Array[], count: number): Float64Array {
  const most = new Float64Array(count).fill(Number.NEGATIVE_INFINITY)
  for (const panel of panels) for (let i = 0; i < count; i++) if (panel[i] > most[i]) most[i] = panel[i]
  return most
}

function lowestStep(stored: Float64Array, openingJ: number): number {
  let lowest = -1
  let leastJ = openingJ
  for (let i = 0; i < stored.length; i++)
    if (stored[i] < leastJ) {
      leastJ = stored[i]
      lowest = i
    }
  return lowest
}

/** The piece in front of which the car stands because the motor cannot climb it. */
function blockedPiece({ course, heldMps }: DrivenRoad, laid: Laid): number {
  if (!laid.timetable.isCutOff) return -1
  const { placeM } = laid.timetable.evening
  const piece = course.pieces.fromM.findIndex(
    (fromM, i) => fromM + course.pieces.lengthM[i] > placeM + 1e-6 && fromM <= placeM + 1e-6,
  )
  return piece >= 0 && heldMps[piece] < CRAWL_MPS ? piece : -1
}
