import { FAIMAN_MOST_MPS } from '../engine/cell-temperature.ts'
import type { CarDocument } from './car.ts'
import { placedStages } from './race-model.ts'
import type { RaceDocument } from './race.ts'

const FAIMAN_MOST_KMH = FAIMAN_MOST_MPS * 3.6

/** An open rack's formula does not hold for a car's speed. */
export function rackNotes({ panels }: CarDocument): string[] {
  const racks = panels.filter((panel) => panel.cooling.kind === 'faiman').map((panel) => panel.name)
  if (racks.length === 0) return []
  const limit = `air faster than ${FAIMAN_MOST_KMH} km/h counts as ${FAIMAN_MOST_KMH} km/h`
  return [`${racks.join(', ')}: cooled by an open rack’s formula, so ${limit}.`]
}

/** Where a parked car does not see the whole sky. */
export function horizonNotes(race: RaceDocument): string[] {
  const stops = placedStages(race).flatMap(({ stage }) => (stage.stop?.horizon === undefined ? [] : [stage.finish]))
  const windows = race.days.flatMap(({ date: on, charging }) =>
    charging.flatMap((window) => (window.horizon === undefined ? [] : [`charging on ${on} from ${window.from}`])),
  )
  const places = [...stops, ...windows]
  if (places.length === 0) return []
  return [`A horizon hides sun and sky here, elsewhere the sky is open: ${places.join(', ')}.`]
}
