import { fitLosses } from '../engine/loss-fit.ts'
import { prepareTracker } from '../engine/tracker.ts'
import type { Tracker, TrackerWindow } from '../engine/tracker.ts'
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
})

/** A tracker with its window; its losses as given, or fitted to its bench points. */
export function trackerModel(tracker: CarDocument['trackers'][number]): Tracker {
  const { losses, bench } = tracker
  return prepareTracker({
    name: tracker.name,
    window: windowModel(tracker),
    losses:
      losses === undefined
        ? fitLosses((bench ?? []).map((p) => ({ ...p, outputW: p.inputW * (p.efficiencyPct / 100) }))).losses
        : {
            standingW: losses.standingW,
            switchingFraction: losses.switchingPct / 100,
            conductionOhm: losses.conductionOhm,
            rectifierV: losses.rectifierV,
          },
    trackingEfficiency: tracker.trackingPct / 100,
  })
}
