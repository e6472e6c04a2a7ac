import { judgementDocument } from '../documents/judgement.ts'
import { readingDocument } from '../documents/reading.ts'
import type { KeptReading } from '../documents/tracker-report.ts'
import type { StoredReading } from '../store/reading-store.ts'
import type { Store } from '../store/store.ts'

/** A stored reading as it is shown: its document with what it says. */
export const keptOf = ({
  reading,
  judgement,
  carId,
  carVersion,
  receivedAt,
  isSetAside,
}: StoredReading): KeptReading => ({
  ...judgementDocument.parse(judgement),
  reading: readingDocument.parse(reading),
  carId,
  carVersion,
  receivedAt,
  isSetAside,
})

/** Every reading of a race, in the order in which they came. */
export const readingsOf = async (store: Store, raceId: string): Promise<KeptReading[]> =>
  (await store.readings.list(raceId)).map(keptOf)

/** A car's readings in a race that are not set aside, in the order in which they came. */
export const heldOf = async (store: Store, raceId: string, carId: string): Promise<KeptReading[]> =>
  (await readingsOf(store, raceId)).filter((kept) => kept.carId === carId && !kept.isSetAside)
