import { fitLosses, type LossFit } from '../engine/loss-fit.ts'
import { lossTable } from '../engine/loss-table.ts'
import { type Derating, prepareTracker, type Tracker, type TrackerWindow } from '../engine/tracker.ts'
import { trackerOutputW } from '../engine/tracker-output.ts'
import type { CarDocument } from './car.ts'

/** The window of a tracker in the engine's terms. */
export const windowModel = ({ window }: CarDocument['trackers'][number]): TrackerWindow => ({
  inputMinV: window.inputMinV,
  inputMaxV: window.inputMaxV,
  inputMaxA: window.inputMaxA,
  outputMinV: window.outputMinV,
  outputMaxV: window.outputMaxV,
  outputMaxA: window.outputMaxA ?? Number.POSITIVE_INFINITY,
  maxW: window.maxW,
  leastRiseV: window.leastRiseV,
})

type TrackerDocument = CarDocument['trackers'][number]

/** The points of a tracker's bench in the engine's terms; none where its losses were given. */
export const benchPoints = ({ bench = [] }: TrackerDocument) =>
  bench.map(({ inputV, outputV, inputW, efficiencyPct, spreadPct }) => ({
    inputV,
    outputV,
    inputW,
    outputW: inputW * (efficiencyPct / 100),
    efficiencySd: Math.max(spreadPct, LEAST_SPREAD_PCT) / 100,
  }))

/** No bench is better than this, whatever it says. Ours; no source. [points] */
const LEAST_SPREAD_PCT = 0.05

/** Four terms fitted to a tracker's bench; null where its losses were given. */
export const benchFit = (tracker: TrackerDocument): LossFit | null =>
  tracker.bench === undefined ? null : fitLosses(benchPoints(tracker))

/** A tracker with its window; its losses as given, or as its bench points show them. */
export function trackerModel(tracker: TrackerDocument): Tracker {
  const { losses, derating } = tracker
  const model = prepareTracker({
    name: tracker.name,
    window: windowModel(tracker),
    losses:
      losses === undefined
        ? fitLosses(benchPoints(tracker)).losses
        : {
            standingW: losses.standingW,
            switchingFraction: losses.switchingPct / 100,
            conductionOhm: losses.conductionOhm,
            rectifierV: losses.rectifierV,
          },
    trackingEfficiency: tracker.trackingPct / 100,
    ...(derating === undefined ? {} : { derating: deratingModel(derating) }),
    standbyW: tracker.standbyW,
    isDead: tracker.isDead,
  })
  if (tracker.benchUse === 'fit') return model
  const curveLossW = ({ inputW, inputV, outputV }: { inputW: number; inputV: number; outputV: number }): number =>
    inputW - trackerOutputW(model, inputW, inputV, outputV)
  return { ...model, table: lossTable(benchPoints(tracker), curveLossW) }
}

const deratingModel = (derating: NonNullable<TrackerDocument['derating']>): Derating => ({
  fullToC: derating.fullToC,
  leastFromC: derating.leastFromC,
  leastShare: derating.leastPct / 100,
  parkedCPerW: derating.parkedCPerW,
  movingCPerW: derating.movingCPerW,
})
