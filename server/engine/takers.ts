import type { BalanceDay, Car, TrackerDay } from './balance.ts'
import type { Energy } from './energy.ts'
import { type BestPoint, newOperatingPoint, operatingPoint, type Surroundings } from './operating-point.ts'
import { offBest } from './string-harvest.ts'
import { channelsOf, LIMITS, type Tracker, type TrackerLimit } from './tracker.ts'
import { inputForOutputW, trackerOutputW } from './tracker-output.ts'

/** All trackers of a car in one step: what each takes, gives and why not more. */
export interface Takers {
  /** Every tracker takes what its window allows at this pack voltage; those that take nothing stand by. */
  take(step: number, packV: number): void
  /** Every tracker stands by. */
  rest(step: number, packV: number): void
  /** A full pack: the outputs together fall by up to so much, each by the same share. */
  reduceBy(excessW: number, packV: number): void
  inputW(): number
  outputW(): number
  /** Drawn from the pack by those that stand by. */
  standbyW(): number
  /** Adds the step to the sums. @returns what was denied by window or pack, tracking not counted. [J] */
  book(trackers: TrackerDay[], sums: Energy, durationS: number): number
}

/** The steps of the most that the window allows, in which a tracker's energy is sorted. */
const POWER_SHARES = 12

/** Nothing yet of each tracker of a car: the strings in order, the channels of each in order. */
export const emptyDays = (car: Car, count: number): TrackerDay[] =>
  car.trackers.flatMap((held) =>
    channelsOf(held).map(() => ({
      inputJ: 0,
      lossJ: 0,
      standbyJ: 0,
      deniedJ: 0,
      inputJV: 0,
      fellJ: new Float64Array(POWER_SHARES),
      limits: new Map(),
      steps: {
        inputW: new Float64Array(count),
        outputW: new Float64Array(count),
        inputV: new Float64Array(count),
        packV: new Float64Array(count),
        bestW: new Float64Array(count),
        deniedW: new Float64Array(count),
        fullW: new Float64Array(count),
        limit: new Uint8Array(count),
      },
    })),
  )

const standbyOf = (tracker: Tracker): number => (tracker.isDead === true ? 0 : (tracker.standbyW ?? 0))

/** The trackers of a car on a day's harvest; string `i` is held by tracker `i`, alone or as its channels. */
export function takers(car: Car, { harvest, weather, steps }: BalanceDay): Takers {
  const n = car.trackers.length
  const column = () => new Float64Array(n)
  const inputW = column()
  const inputV = column()
  const outputW = column()
  const windowW = column()
  const trackingW = column()
  const fullW = column()
  const standingByW = column()
  const limits: (TrackerLimit | null)[] = Array.from({ length: n }, () => null)
  const channels = car.trackers.map(channelsOf)
  const allStandbyW = channels.map((list) => list.reduce((total, one) => total + standbyOf(one), 0))
  const point = newOperatingPoint()
  const around: Surroundings = { packV: 0, airC: 0, isMoving: false }
  let step = 0
  const strings = car.trackers.map((_, s) => offBest(car.array, s, harvest))
  const powerAtV = strings.map((string) => (volts: number) => string.atV(step, volts))
  const best = strings.map((string, s): BestPoint => {
    const hasOneHill = car.array.strings.plain[s] !== null
    const bestBetweenV = (lowV: number, highV: number): number => string.bestBetweenV(step, lowV, highV)
    return { W: 0, V: 0, bestBetweenV: hasOneHill ? undefined : bestBetweenV }
  })

  return {
    take(index, packV) {
      step = index
      around.packV = packV
      around.airC = weather.airC[index]
      around.isMoving = steps.speedMps[index] > 0
      for (let s = 0; s < n; s++) {
        best[s].W = harvest.bestW[s][index]
        best[s].V = harvest.bestV[s][index]
        operatingPoint(car.trackers[s], best[s], around, powerAtV[s], point)
        inputW[s] = point.inputW
        inputV[s] = point.inputV
        outputW[s] = trackerOutputW(car.trackers[s], point.inputW, point.inputV, packV)
        windowW[s] = point.deniedW
        trackingW[s] = Math.max(best[s].W - point.inputW - point.deniedW, 0)
        fullW[s] = 0
        standingByW[s] = point.inputW > 0 ? 0 : allStandbyW[s]
        limits[s] = point.limit
      }
    },
    rest(index, packV) {
      step = index
      around.packV = packV
      for (const values of [inputW, inputV, outputW, windowW, trackingW, fullW]) values.fill(0)
      standingByW.set(allStandbyW)
      limits.fill('asleep')
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
    standbyW: () => sum(standingByW),
    book(trackers, sums, durationS) {
      let deniedJ = 0
      let first = 0
      for (let s = 0; s < n; s++) {
        sums.income += inputW[s] * durationS
        sums.trackers += (inputW[s] - outputW[s] + standingByW[s]) * durationS
        sums.window += windowW[s] * durationS
        sums.tracking += trackingW[s] * durationS
        sums.full += fullW[s] * durationS
        deniedJ += (windowW[s] + fullW[s]) * durationS
        bookChannels(s, trackers, first, durationS)
        first += channels[s].length
      }
      return deniedJ
    },
  }

  /** What each tracker of a string did: its share of all but the losses, which are its own. */
  function bookChannels(s: number, days: TrackerDay[], first: number, durationS: number): void {
    const own = channels[s]
    if (own.length === 1) return bookOne(s, days[first], own[0], 1, outputW[s], durationS)
    const { share = 1 } = car.trackers[s].channels ?? {}
    const couldW = trackerOutputW(car.trackers[s], inputW[s], inputV[s], around.packV)
    for (let c = 0; c < own.length; c++) {
      // With all dead, what is denied is denied in even shares; else it is the working ones'.
      const part = share === 0 ? 1 / own.length : own[c].isDead === true ? 0 : share
      const ownW = trackerOutputW(own[c], inputW[s] * part, inputV[s], around.packV)
      bookOne(s, days[first + c], own[c], part, couldW > 0 ? (ownW / couldW) * outputW[s] : 0, durationS)
    }
  }

  function bookOne(s: number, day: TrackerDay, own: Tracker, part: number, givesW: number, durationS: number): void {
    const { steps: along } = day
    const limit = own.isDead === true ? 'dead' : limits[s]
    along.inputW[step] = inputW[s] * part
    along.outputW[step] = givesW
    along.inputV[step] = inputV[s]
    along.packV[step] = around.packV
    along.bestW[step] = (inputW[s] + windowW[s] + trackingW[s] + fullW[s]) * part
    along.deniedW[step] = windowW[s] * part
    along.fullW[step] = fullW[s] * part
    along.limit[step] = limit === null ? 0 : LIMITS.indexOf(limit) + 1
    if (standingByW[s] > 0) day.standbyJ += standbyOf(own) * durationS
    addStep(day, own, step, durationS)
  }
}

/** Adds what a tracker did in a step to its day. */
function addStep(day: TrackerDay, tracker: Tracker, step: number, durationS: number): void {
  const { inputW, outputW, inputV, deniedW, fullW, limit } = day.steps
  const inputJ = inputW[step] * durationS
  day.inputJ += inputJ
  day.lossJ += inputJ - outputW[step] * durationS
  day.inputJV += inputJ * inputV[step]
  const share = Math.floor((inputW[step] / tracker.window.maxW) * day.fellJ.length)
  day.fellJ[Math.min(share, day.fellJ.length - 1)] += inputJ
  day.deniedJ += (deniedW[step] + fullW[step]) * durationS
  const name = limit[step] === 0 ? null : LIMITS[limit[step] - 1]
  if (name !== null && name !== 'asleep') note(day, name, durationS, deniedW[step] * durationS)
  if (fullW[step] > 0) note(day, 'full', durationS, fullW[step] * durationS)
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
