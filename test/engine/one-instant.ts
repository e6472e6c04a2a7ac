import {
  type ArrayHarvest,
  arrayHarvest,
  type ArraySteps,
  type Panel,
  prepareArray,
} from '../../server/engine/array.ts'
import type { Horizon } from '../../server/engine/horizon.ts'
import type { Stand } from '../../server/engine/stand.ts'

const RAD = Math.PI / 180

/** Sun, sky and pose of one step. */
export interface Instant {
  elevationDeg: number
  azimuthDeg: number
  dni: number
  dhi: number
  headingDeg: number
  gradeDeg: number
  lifted: boolean
}

const MORNING: Instant = {
  elevationDeg: 30,
  azimuthDeg: 90,
  dni: 800,
  dhi: 120,
  headingDeg: 0,
  gradeDeg: 0,
  lifted: false,
}

export const EXTRA_WM2 = 1366.1

export const flatPanel = (more: Partial<Panel> = {}): Panel => ({
  pitchRad: 0,
  rollRad: 0,
  lifts: true,
  cooling: { kind: 'faiman', u0: 25, u1: 6.84 },
  incidence: 'none',
  ...more,
})

const STAND: Stand = {
  tiltMinRad: 0,
  tiltMaxRad: 90 * RAD,
  azimuthFromRad: 0,
  azimuthToRad: 2 * Math.PI,
  aim: 'at-sun',
  reaimS: 0,
}

function stepOf(instant: Instant, horizon: Horizon | null): ArraySteps {
  const one = (value: number): Float64Array => Float64Array.of(value)
  const [elevation, azimuth] = [instant.elevationDeg * RAD, instant.azimuthDeg * RAD]
  return {
    weather: {
      sun: {
        east: one(Math.cos(elevation) * Math.sin(azimuth)),
        north: one(Math.cos(elevation) * Math.cos(azimuth)),
        up: one(Math.sin(elevation)),
      },
      apparentZenithRad: one(Math.PI / 2 - elevation),
      extraWm2: one(EXTRA_WM2),
      airMass: one(1 / Math.max(0.03, Math.sin(elevation))),
      ghiWm2: one(instant.dni * Math.max(0, Math.sin(elevation)) + instant.dhi),
      dniWm2: one(instant.dni),
      dhiWm2: one(instant.dhi),
      airC: one(20),
    },
    headingRad: one(instant.headingDeg * RAD),
    gradeRad: one(instant.gradeDeg * RAD),
    airSpeedMps: one(0),
    lifted: Uint8Array.of(instant.lifted ? 1 : 0),
    ...(horizon === null ? {} : { horizons: { of: [horizon], at: Int32Array.of(0) } }),
  }
}

/** Light on the panels at one instant, under a horizon where one is given. [W/m²] */
export function lightOn(
  panels: Panel[],
  instant: Partial<Instant>,
  more: { horizon?: Horizon; stand?: Partial<Stand>; albedo?: number; skyModel?: 'hay-davies' | 'perez' } = {},
): { plane: number[]; effective: number[] } {
  const array = prepareArray({
    panels,
    stand: { ...STAND, ...more.stand },
    strings: [],
    albedo: more.albedo ?? 0,
    skyModel: more.skyModel ?? 'hay-davies',
  })
  const harvest: ArrayHarvest = arrayHarvest(array, stepOf({ ...MORNING, ...instant }, more.horizon ?? null))
  return { plane: harvest.planeWm2.map((p) => p[0]), effective: harvest.effectiveWm2.map((p) => p[0]) }
}
