import type { ArrayHarvest } from './array.ts'
import type { Car, TrackerDay } from './balance.ts'
import type { Energy } from './energy.ts'
import { offBestW } from './string-harvest.ts'
import { inputForOutputW, newOperatingPoint, operatingPoint, trackerOutputW } from './tracker.ts'
import type { TrackerLimit } from './tracker.ts'

/** All trackers of a car in one step: what each takes, gives and why not more. */
export interface Takers {
  /** Every tracker takes what its window allows at this pack voltage. */
  take(step: number, packV: number): void
  /** Every tracker is off. */
  rest(): void
  /** A full pack: the outputs together fall by up to so much, each by the same share. */
  reduceBy(excessW: number, packV: number): void
  inputW(): number
  outputW(): number
  /** Adds the step to the sums. @returns what was denied by window or pack, tracking not counted. [J] */
  book(trackers: TrackerDay[], sums: Energy, durationS: number): number
}

/** The trackers of a car on a day's harvest; string `i` is held by tracker `i`. */
export function takers(car: Car, harvest: ArrayHarvest): Takers {
  const n = car.trackers.length
  const inputW = new Float64Array(n)
  const inputV = new Float64Array(n)
  const outputW = new Float64Array(n)
  const windowW = new Float64Array(n)
  const trackingW = new Float64Array(n)
  const fullW = new Float64Array(n)
  const limits: (TrackerLimit | null)[] = Array.from({ length: n }, () => null)
  const point = newOperatingPoint()
  const best = { W: 0, V: 0 }
  let step = 0
  const powerAtV = car.trackers.map((_, s) => (volts: number) => offBestW(car.array, s, step, harvest, volts))

  return {
    take(index, packV) {
      step = index
      for (let s = 0; s < n; s++) {
        best.W = harvest.bestW[s][index]
        best.V = harvest.bestV[s][index]
        operatingPoint(car.trackers[s], best, packV, powerAtV[s], point)
        inputW[s] = point.inputW
        inputV[s] = point.inputV
        outputW[s] = point.inputW > 0 ? trackerOutputW(car.trackers[s], point.inputW, point.inputV, packV) : 0
        windowW[s] = point.deniedW
        trackingW[s] = Math.max(best.W - point.inputW - point.deniedW, 0)
        fullW[s] = 0
        limits[s] = point.limit
      }
    },
    rest() {
      for (const column of [inputW, outputW, windowW, trackingW, fullW]) column.fill(0)
      limits.fill(null)
    },
    reduceBy(excessW, packV) {
      const total = sum(outputW)
      const share = total > 0 ? Math.max(total - excessW, 0) / total : 0
      for (let s = 0; s < n; s++) {
        if (!(outputW[s] > 0)) continue
        outputW[s] *= share
        const lessW = share > 0 ? inputForOutputW(car.trackers[s], outputW[s], inputV[s], packV) : 0
        const heldW = Math.min(lessW, inputW[s])
        fullW[s] = inputW[s] - heldW
        inputW[s] = heldW
      }
    },
    inputW: () => sum(inputW),
    outputW: () => sum(outputW),
    book(trackers, sums, durationS) {
      let deniedJ = 0
      for (let s = 0; s < n; s++) {
        const lossJ = (inputW[s] - outputW[s]) * durationS
        sums.income += inputW[s] * durationS
        sums.trackers += lossJ
        sums.window += windowW[s] * durationS
        sums.tracking += trackingW[s] * durationS
        sums.full += fullW[s] * durationS
        const day = trackers[s]
        day.inputJ += inputW[s] * durationS
        day.lossJ += lossJ
        day.inputJV += inputW[s] * inputV[s] * durationS
        const share = Math.floor((inputW[s] / car.trackers[s].window.maxW) * day.fellJ.length)
        day.fellJ[Math.min(share, day.fellJ.length - 1)] += inputW[s] * durationS
        day.deniedJ += (windowW[s] + fullW[s]) * durationS
        deniedJ += (windowW[s] + fullW[s]) * durationS
        if (limits[s] !== null && limits[s] !== 'asleep')
          note(day, limits[s] as TrackerLimit, durationS, windowW[s] * durationS)
        if (fullW[s] > 0) note(day, 'full', durationS, fullW[s] * durationS)
      }
      return deniedJ
    },
  }
}

function note(day: TrackerDay, limit: TrackerLimit | 'full', durationS: number, deniedJ: number): void {
  const so = day.limits.get(limit) ?? { durationS: 0, deniedJ: 0 }
  so.durationS += durationS
  so.deniedJ += deniedJ
  day.limits.set(limit, so)
}

function sum(values: Float64Array): number {
  let total = 0
  for (let i = 0; i < values.length; i++) total += values[i]
  return total
}
