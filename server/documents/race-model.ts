import { course } from '../engine/course.ts'
import type { Course, StageRoad } from '../engine/course.ts'
import type { DayRules, StageRule } from '../engine/day-rules.ts'
import { InputError } from '../engine/input-error.ts'
import { cumulativeM } from '../engine/route.ts'
import type { RoadPoints, Stretch } from '../engine/route.ts'
import { fieldName } from './check.ts'
import { horizonModel } from './horizon-model.ts'
import { instantMs } from './local-time.ts'
import { withSeconds } from './quantity.ts'
import type { RaceDocument, StageDocument } from './race.ts'
import type { RouteDocument } from './route.ts'

const DEG = Math.PI / 180

/** A stage of a race with the field it stands in. */
export interface PlacedStage {
  stage: StageDocument
  dayIndex: number
  field: string
}

/** All stages in the order they are driven. */
export const placedStages = (race: RaceDocument): PlacedStage[] =>
  race.days.flatMap((day, dayIndex) =>
    day.stages.map((stage, i) => ({ stage, dayIndex, field: `race.days[${dayIndex}].stages[${i}]` })),
  )

/** The zone that a day's clock runs in. */
export const zoneOf = (race: RaceDocument, dayIndex: number): string => race.days[dayIndex].zone ?? race.zone

/**
 * The road of a race: its stages' stretches of their routes, joined.
 *
 * @param cutsKm  more edges of pieces on each stage, from the start of the stage. [km]
 * @throws InputError when a stage names a route that is not given, or leaves its route
 */
export function raceCourse(
  race: RaceDocument,
  routes: Record<string, RouteDocument>,
  cutsKm: (stage: string) => number[] = () => [],
): Course {
  const known = new Map<string, { points: RoadPoints; lengthM: number }>()
  const roads = placedStages(race).map(({ stage, field }): StageRoad => {
    if (!Object.hasOwn(routes, stage.route))
      throw new InputError(
        'unknown-route',
        `${field}.route`,
        `${JSON.stringify(stage.route)} given; expected one of ${
          Object.keys(routes)
            .map((id) => JSON.stringify(id))
            .join(', ') || 'the given routes, of which there are none'
        }`,
      )
    const route = routes[stage.route]
    const road = known.get(stage.route) ?? roadOf(route, stage.route)
    known.set(stage.route, road)
    return {
      points: road.points,
      stretches: stretchesOf(route, stage.route, road.lengthM),
      ...stretchOfRoad(stage, field, road.lengthM),
      cutsM: cutsKm(stage.id).map((km) => (stage.fromKm + km) * 1000),
      roughnessM: route.roughnessM,
      roadHeatC: route.roadHeatC,
      limitMps: route.limitKmh / 3.6,
    }
  })
  return course(roads)
}

/** People round lengths: a stage may end so far beyond the last point and then ends on it. [M] */
const ROUNDING_M = 100

/** Shorter than this is no road. [M] */
const SHORTEST_M = 1

function stretchOfRoad(stage: StageDocument, field: string, lengthM: number): { fromM: number; toM: number } {
  const check = (name: 'fromKm' | 'toKm', isGood: boolean): void => {
    if (!isGood)
      throw new InputError(
        'off-the-route',
        `${field}.${name}`,
        `${stage[name]} given; expected a place on the route, which is ${(lengthM / 1000).toFixed(3)} km long`,
      )
  }
  const fromM = stage.fromKm * 1000
  const toM = stage.toKm === undefined ? lengthM : stage.toKm * 1000
  check('fromKm', fromM <= lengthM - SHORTEST_M)
  check('toKm', toM <= lengthM + ROUNDING_M)
  if (toM < fromM + SHORTEST_M)
    throw new InputError(
      'too-short',
      `${field}.toKm`,
      `${stage.toKm} given; expected at least ${SHORTEST_M} m beyond fromKm`,
    )
  return { fromM, toM: Math.min(toM, lengthM) }
}

function roadOf(route: RouteDocument, id: string): { points: RoadPoints; lengthM: number } {
  const { latDeg, lonDeg, elevationM } = route.points
  const points = {
    latRad: Float64Array.from(latDeg, (deg) => deg * DEG),
    lonRad: Float64Array.from(lonDeg, (deg) => deg * DEG),
    altM: elevationM === undefined ? new Float64Array(latDeg.length) : Float64Array.from(elevationM),
  }
  const along = cumulativeM(points)
  const lengthM = along[along.length - 1]
  if (lengthM >= SHORTEST_M) return { points, lengthM }
  throw new InputError(
    'too-short',
    fieldName(['routes', id, 'points']),
    `a road of ${lengthM.toFixed(3)} m given; expected at least ${SHORTEST_M} m from the first point to the last`,
  )
}

function stretchesOf(route: RouteDocument, id: string, lengthM: number): Stretch[] {
  return route.stretches.map((s, i) => {
    if (s.fromKm * 1000 >= lengthM)
      throw new InputError(
        'off-the-route',
        fieldName(['routes', id, 'stretches', i, 'fromKm']),
        `${s.fromKm} given; expected less than the length of the route (${(lengthM / 1000).toFixed(3)} km)`,
      )
    return {
      fromM: s.fromKm * 1000,
      toM: s.toKm * 1000,
      ...(s.limitKmh === undefined ? {} : { limitMps: s.limitKmh / 3.6 }),
      ...(s.surfaceFactor === undefined ? {} : { surfaceFactor: s.surfaceFactor }),
      ...(s.haltsPerKm === undefined ? {} : { haltsPerM: s.haltsPerKm / 1000 }),
    }
  })
}

/** Stops and names of all stages; opening hours are given for every day that the car may come. */
export function stageRules(race: RaceDocument): StageRule[] {
  return placedStages(race).map(({ stage, field }) => {
    const { stop } = stage
    const on = (time: string | undefined, name: string): Float64Array =>
      Float64Array.from(race.days, (day, d) =>
        time === undefined
          ? Number.NaN
          : instantMs(day.date, time, stop?.zone ?? zoneOf(race, d), `${field}.stop.${name}`),
      )
    return {
      name: stage.name,
      start: stage.start,
      finish: stage.finish,
      stop:
        stop === undefined
          ? null
          : {
              name: stage.finish,
              lengthS: stop.minutes * 60,
              runsFromOpening: stop.clockStarts === 'at-opening',
              lifts: stop.lift,
              raiseS: stop.raiseMin * 60,
              lowerS: stop.lowerMin * 60,
              opensMs: on(stop.opensAt, 'opensAt'),
              closesMs: on(stop.closesAt, 'closesAt'),
              horizon: horizonModel(stop.horizon, `${field}.stop.horizon`),
            },
    }
  })
}

/** Hours of every day as instants. */
export function dayRules(race: RaceDocument): DayRules[] {
  const stages = placedStages(race)
  return race.days.map((day, d) => {
    const at = ({ time, name }: NamedTime) =>
      instantMs(day.date, time, zoneOf(race, d), fieldName(['race', 'days', d, ...name]))
    const charging = day.charging.map((w, i) => ({
      from: { time: w.from, name: ['charging', i, 'from'] },
      to: { time: w.to, name: ['charging', i, 'to'] },
      lifts: w.lift,
      horizon: horizonModel(w.horizon, fieldName(['race', 'days', d, 'charging', i, 'horizon'])),
    }))
    const driving = {
      from: { time: day.driving.from, name: ['driving', 'from'] },
      to: { time: day.driving.to, name: ['driving', 'to'] },
    }
    const first = [driving.from, ...charging.map((w) => w.from)].reduce((a, b) => (isLater(a, b) ? b : a))
    const last = [driving.to, ...charging.map((w) => w.to)].reduce((a, b) => (isLater(b, a) ? b : a))
    return {
      opensMs: at(day.release === undefined ? first : { time: day.release, name: ['release'] }),
      closesMs: at(day.impound === undefined ? last : { time: day.impound, name: ['impound'] }),
      drivingFromMs: at(driving.from),
      drivingToMs: at(driving.to),
      charging: charging.map((w) => ({ fromMs: at(w.from), toMs: at(w.to), lifts: w.lifts, horizon: w.horizon })),
      raiseS: day.raiseMin * 60,
      lowerS: day.lowerMin * 60,
      lastStage: stages.findLastIndex((s) => s.dayIndex <= d),
    }
  })
}

/** A local time with its place in the day's document. */
interface NamedTime {
  time: string
  name: (string | number)[]
}

const isLater = (one: NamedTime, other: NamedTime): boolean => withSeconds(one.time) > withSeconds(other.time)
