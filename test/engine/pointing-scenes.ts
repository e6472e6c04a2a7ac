import * as fc from 'fast-check'
import {
  type ArrayHarvest,
  type ArrayModel,
  type ArraySteps,
  arrayHarvest,
  type Panel,
  prepareArray,
} from '../../server/engine/array.ts'
import { fillSky, skyBlock } from '../../server/engine/panel-light.ts'
import { poseLight } from '../../server/engine/pose-light.ts'
import type { Pose, Stand } from '../../server/engine/stand.ts'
import type { StringModel } from '../../server/engine/substrings.ts'

export const RAD = Math.PI / 180

const CELL = {
  lightA: 6.25,
  saturationA: 8.658679e-12,
  seriesOhm: 0.165 / 38,
  shuntOhm: 310 / 38,
  modifiedIdealityV: 1.015 / 38,
  currentCoefficientAPerC: 0.0026,
  bandGapEv: 1.121,
  bandGapPerC: -0.0002677,
}

export const panel = (more: Partial<Panel> = {}): Panel => ({
  pitchRad: 0,
  rollRad: 0,
  lifts: true,
  cooling: { kind: 'car', heatFraction: 0.67, lengthM: 2, radiationWm2K: 5.5, stillWm2K: 17 },
  incidence: 'none',
  ...more,
})

export const string = (groups: StringModel['groups'], more: Partial<StringModel> = {}): StringModel => ({
  name: 'string',
  cell: CELL,
  groups,
  cellsInParallel: 1,
  soilingFraction: 0,
  bypassV: 0.5,
  ...more,
})

/** Any tilt, any azimuth, a pose of its own for every step. */
export const ANY_POSE: Stand = {
  tiltMinRad: 0,
  tiltMaxRad: 90 * RAD,
  azimuthFromRad: 0,
  azimuthToRad: 2 * Math.PI,
  aim: 'most-light',
  reaimS: 0,
}

export const array = (more: Partial<ArrayModel> = {}): ArrayModel => ({
  panels: [panel()],
  stand: ANY_POSE,
  strings: [string([{ panel: 0, cellsInSeries: 38 }])],
  albedo: 0,
  skyModel: 'hay-davies',
  ...more,
})

/** Sun and light of one step over a parked car. [°, W/m²] */
export interface Moment {
  zenithDeg: number
  azimuthDeg: number
  dni: number
  dhi: number
  headingDeg: number
}

export const ghiOf = ({ zenithDeg, dni, dhi }: Moment): number => dni * Math.max(0, Math.cos(zenithDeg * RAD)) + dhi

export const EXTRA_WM2 = 1366.1

/** Steps of a lifted array, all in one hold or each in its own. */
export function liftedSteps(moments: Moment[], inOneHold = false): ArraySteps {
  const column = (pick: (each: Moment) => number): Float64Array => Float64Array.from(moments, pick)
  const level = (each: Moment): number => Math.sin(each.zenithDeg * RAD)
  return {
    weather: {
      sun: {
        east: column((each) => level(each) * Math.sin(each.azimuthDeg * RAD)),
        north: column((each) => level(each) * Math.cos(each.azimuthDeg * RAD)),
        up: column((each) => Math.cos(each.zenithDeg * RAD)),
      },
      apparentZenithRad: column((each) => each.zenithDeg * RAD),
      extraWm2: column(() => EXTRA_WM2),
      airMass: column((each) => 1 / Math.max(0.03, Math.cos(each.zenithDeg * RAD))),
      ghiWm2: column(ghiOf),
      dniWm2: column((each) => each.dni),
      dhiWm2: column((each) => each.dhi),
      airC: column(() => 20),
    },
    headingRad: column((each) => each.headingDeg * RAD),
    gradeRad: column(() => 0),
    airSpeedMps: column(() => 0),
    lifted: new Uint8Array(moments.length).fill(1),
    ...(inOneHold ? { hold: new Int32Array(moments.length) } : {}),
  }
}

/** Evenly spread. */
const number = (min: number, max: number) =>
  fc.noBias(fc.integer({ min: 0, max: 1_000_000 })).map((share) => min + ((max - min) * share) / 1_000_000)

/** Clear to overcast, high sun to the horizon. */
export const anyMoment: fc.Arbitrary<Moment> = fc
  .record({
    zenithDeg: number(0, 89),
    azimuthDeg: number(0, 360),
    clear: fc.oneof(fc.constant(0), number(0, 1), number(0, 1)),
    haze: number(0, 1),
    headingDeg: number(0, 360),
  })
  .map(({ zenithDeg, azimuthDeg, clear, haze, headingDeg }) => {
    const cos = Math.cos(zenithDeg * RAD)
    return { zenithDeg, azimuthDeg, dni: clear * 950 * cos ** 0.3, dhi: (20 + 380 * haze) * cos, headingDeg }
  })

/** Any stand that the checks let pass. */
export const anyStand: fc.Arbitrary<Stand> = fc
  .record({
    tilt: fc.tuple(number(0, 1), number(0, 1)),
    from: number(0, 360),
    width: fc.oneof(fc.constant(0), number(0, 350), fc.constant(360)),
  })
  .map(({ tilt, from, width }) => ({
    tiltMinRad: Math.min(...tilt) * 40 * RAD,
    tiltMaxRad: (40 + 50 * Math.max(...tilt)) * RAD,
    azimuthFromRad: from * RAD,
    azimuthToRad: (from + width) * RAD,
    aim: 'most-light' as const,
    reaimS: 0,
  }))

/** One to four panels, lifting or not, with strings on one panel each. */
export const anyArray = (steepDeg: number): fc.Arbitrary<ArrayModel> =>
  fc
    .record({
      panels: fc.array(
        fc.record({
          pitch: number(-steepDeg, steepDeg),
          roll: number(-steepDeg, steepDeg),
          lifts: fc.boolean(),
          cells: fc.integer({ min: 10, max: 120 }),
        }),
        { minLength: 1, maxLength: 4 },
      ),
      incidence: fc.constantFrom('none' as const, 'physical' as const, 'martin-ruiz' as const, 'ashrae' as const),
      albedo: number(0, 0.6),
      skyModel: fc.constantFrom('hay-davies' as const, 'perez' as const),
      stand: anyStand,
    })
    .map(({ panels, incidence, albedo, skyModel, stand }) => ({
      panels: panels.map(({ pitch, roll, lifts }, p) =>
        panel({ pitchRad: pitch * RAD, rollRad: roll * RAD, lifts: lifts || p === 0, incidence }),
      ),
      strings: panels.map(({ cells }, p) => string([{ panel: p, cellsInSeries: cells }])),
      albedo,
      skyModel,
      stand,
    }))

export const SUN: Moment = { zenithDeg: 60, azimuthDeg: 70, dni: 800, dhi: 0, headingDeg: 33 }

export const powerW = (harvest: ArrayHarvest, i: number): number =>
  harvest.bestW.reduce((sum, watts) => sum + watts[i], 0)

/** Power of the array at given poses in one moment. [W] */
export function powersW(model: ArrayModel, moment: Moment, poses: Pose[]): number[] {
  const aim = {
    tiltRad: Float64Array.from(poses, (pose) => pose.tiltRad),
    azimuthRad: Float64Array.from(poses, (pose) => pose.azimuthRad),
  }
  const harvest = arrayHarvest(prepareArray(model), { ...liftedSteps(poses.map(() => moment)), aim })
  return poses.map((_, i) => powerW(harvest, i))
}

/** What the search holds a pose to be worth in one moment. [W] */
export function lightOf(model: ArrayModel, moment: Moment): (pose: Pose) => number {
  const prepared = prepareArray(model)
  const { weather, headingRad } = liftedSteps([moment])
  const sky = skyBlock(1)
  fillSky(model.skyModel, weather, 0, 1, sky)
  const light = poseLight(prepared.aim)
  light.hold({ sky, count: 1, headingRad: headingRad[0], albedo: model.albedo })
  return ({ tiltRad, azimuthRad }) => light.powerW(tiltRad, azimuthRad)
}

/** A canopy that takes up to 0.4 of the beam of a sun that is less than 50° over the deck, ahead more than behind. */
export const CANOPY = [
  { bearingRad: 0, heightRad: 50 * RAD, lostShare: 0.4 },
  { bearingRad: Math.PI, heightRad: 20 * RAD, lostShare: 0.1 },
]
