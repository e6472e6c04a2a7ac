import { broughtW } from '../balance.ts'
import { wheelToBus } from '../drive.ts'
import type { DayForecast, Race } from '../forecast.ts'
import { type Going, holdingN } from '../road.ts'
import type { Sky } from '../sky.ts'
import { emptySteps } from '../steps.ts'
import type { SunPath } from '../sun.ts'
import type { Reach } from './engine-tables.ts'
import { sunOnBusW } from './sun-on-bus.ts'

/** What the sky could be at most: the same air without clouds. */
const cleared = (sky: Sky): Sky => ({
  ...sky,
  places: sky.places.map((place) => ({ ...place, light: { kind: 'clear' } })),
})

/**
 * What the sun would bring under a clear sky as a forecast passes each piece.
 *
 * @returns [W] (pieces of the day)
 */
export function clearPowerW(race: Race, path: SunPath, forecast: DayForecast, reach: Reach): Float64Array {
  const { steps: driven, balance } = forecast
  const { pieces } = race.course
  const steps = emptySteps(reach.count)
  const packV = new Float64Array(reach.count)
  let last = -1
  for (let i = 0; i < driven.count; i++) {
    const piece = driven.piece[i] - reach.first
    if (driven.speedMps[i] === 0 || piece <= last || piece >= reach.count) continue
    for (last++; last <= piece; last++) set(last, i)
    last = piece
  }
  for (last++; last < reach.count; last++) set(last, driven.count - 1)
  steps.count = reach.count
  return sunOnBusW({ ...race, sky: cleared(race.sky) }, path, steps, packV)

  function set(piece: number, i: number): void {
    const at = reach.first + piece
    steps.atMs[piece] = driven.atMs[i]
    steps.piece[piece] = at
    steps.latRad[piece] = pieces.latRad[at]
    steps.lonRad[piece] = pieces.lonRad[at]
    steps.altM[piece] = pieces.altM[at]
    steps.headingRad[piece] = pieces.headingRad[at]
    steps.gradeRad[piece] = pieces.gradeRad[at]
    steps.speedMps[piece] = driven.speedMps[i]
    packV[piece] = balance.packV[i]
  }
}

/**
 * Share of a clear sky's energy that a forecast has on the road: what trackers bring, and what a full pack refuses.
 *
 * @param clearW  as `clearPowerW` has it. [W] (pieces of the day)
 * @returns 0..1; 0 where a clear sky brings nothing either
 */
export function sunShare({ steps, balance }: DayForecast, clearW: Float64Array, reach: Reach): number {
  let broughtJ = 0
  let clearJ = 0
  for (let i = 0; i < steps.count; i++) {
    if (steps.speedMps[i] === 0) continue
    const durationS = (steps.toMs[i] - steps.fromMs[i]) / 1000
    const refusedW = balance.trackers.reduce((sum, tracker) => sum + tracker.steps.fullW[i], 0)
    broughtJ += (broughtW(balance, i) + refusedW) * durationS
    clearJ += clearW[steps.piece[i] - reach.first] * durationS
  }
  return clearJ > 0 ? Math.min(Math.max(broughtJ / clearJ, 0), 1) : 0
}

/**
 * How each piece's load grows with the headwind at a speed, in the air that a forecast met.
 *
 * @param speedMps  [Mps] (pieces of the day)
 * @returns [W·s/m] (pieces of the day)
 */
export function loadPerHeadwind(race: Race, forecast: DayForecast, reach: Reach, speedMps: Float64Array): Float64Array {
  const { road } = forecast
  const bus = { busW: 0, lossW: 0, brakedW: 0 }
  const going: Going = { gradeRad: 0, surfaceFactor: 1, headwindMps: 0, crosswindMps: 0, densityKgM3: 1.2 }
  return speedMps.map((speed, i) => {
    const piece = reach.first + i
    going.gradeRad = race.course.pieces.gradeRad[piece]
    going.surfaceFactor = road.surfaceFactor[piece]
    going.crosswindMps = road.crosswindMps[piece]
    going.densityKgM3 = road.densityKgM3[piece]
    const busW = (headwindMps: number): number => {
      going.headwindMps = headwindMps
      return wheelToBus(race.car.drive, holdingN(race.car.load, speed, going) * speed, speed, bus).busW
    }
    return (busW(road.headwindMps[piece] + 0.5) - busW(road.headwindMps[piece] - 0.5)) / 1
  })
}
