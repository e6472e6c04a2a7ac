import type { Car } from '../engine/balance.ts'
import { prepareTracker, sharedTracker, type Tracker } from '../engine/tracker.ts'
import { arrayModel } from './array-model.ts'
import type { Surroundings } from './array-model.ts'
import type { CarDocument } from './car.ts'
import type { LearnedLosses } from './learned.ts'
import { packModel } from './pack-model.ts'
import { boundsModel, driveModel, roadLoadModel } from './road-model.ts'
import { trackerModel } from './tracker-model.ts'

/**
 * The car as the engine needs it: SI units, tables built, `trackers[i]` holding string `i`, alone or as several.
 *
 * @param learned  losses of trackers by name, in place of those of the document
 */
export function carModel(car: CarDocument, surroundings: Surroundings, learned: LearnedLosses = {}): Car {
  const { body, drive, auxiliaries } = car
  return {
    load: roadLoadModel(body),
    drive: driveModel(drive),
    bounds: boundsModel(drive),
    windHeightM: body.windHeightM,
    auxDrivingW: auxiliaries.drivingW,
    auxParkedW: auxiliaries.parkedW,
    auxChargingW: auxiliaries.chargingW ?? auxiliaries.parkedW,
    array: arrayModel(car, surroundings),
    trackers: car.strings.map((s) => stringTracker(car, s, learned)),
    pack: packModel(car.pack),
    reserveCharge: car.pack.reservePct / 100,
  }
}

/** What holds a string: its tracker, or several as one. What was learned stands in for a bench and its table. */
function stringTracker(car: CarDocument, string: CarDocument['strings'][number], learned: LearnedLosses): Tracker {
  const held = [string.tracker, ...string.alsoTrackers].map((name) => {
    const model = trackerModel(car.trackers.find((t) => t.name === name) ?? car.trackers[0])
    if (!Object.hasOwn(learned, name)) return model
    const { table: _shown, ...rest } = model
    return prepareTracker({ ...rest, losses: learned[name] })
  })
  return held.length === 1 ? held[0] : sharedTracker(string.name, held)
}
