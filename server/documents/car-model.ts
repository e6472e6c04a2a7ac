import type { Car } from '../engine/balance.ts'
import { prepareTracker } from '../engine/tracker.ts'
import { arrayModel } from './array-model.ts'
import type { Surroundings } from './array-model.ts'
import type { CarDocument } from './car.ts'
import type { LearnedLosses } from './learned.ts'
import { packModel } from './pack-model.ts'
import { driveModel, roadLoadModel } from './road-model.ts'
import { trackerModel } from './tracker-model.ts'

/**
 * The car as the engine needs it: SI units, tables built, `trackers[i]` holding string `i`.
 *
 * @param learned  losses of trackers by name, in place of those of the document
 */
export function carModel(car: CarDocument, surroundings: Surroundings, learned: LearnedLosses = {}): Car {
  const { body, drive, auxiliaries } = car
  return {
    load: roadLoadModel(body),
    drive: driveModel(drive),
    windHeightM: body.windHeightM,
    auxDrivingW: auxiliaries.drivingW,
    auxParkedW: auxiliaries.parkedW,
    auxChargingW: auxiliaries.chargingW ?? auxiliaries.parkedW,
    array: arrayModel(car, surroundings),
    trackers: car.strings.map((s) => {
      const model = trackerModel(car.trackers.find((t) => t.name === s.tracker) ?? car.trackers[0])
      return Object.hasOwn(learned, s.tracker) ? prepareTracker({ ...model, losses: learned[s.tracker] }) : model
    }),
    pack: packModel(car.pack),
    reserveCharge: car.pack.reservePct / 100,
  }
}
