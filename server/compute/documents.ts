import { carDocument } from '../documents/car.ts'
import { raceDocument } from '../documents/race.ts'
import { routeDocument } from '../documents/route.ts'
import { skyDocument } from '../documents/sky.ts'

/** Schema of each kind of document. */
export const DOCUMENTS = { car: carDocument, route: routeDocument, race: raceDocument, sky: skyDocument }

export type Kind = keyof typeof DOCUMENTS
