import { createHash } from 'node:crypto'
import type { LearnedLosses } from '../documents/learned.ts'
import { ENGINE_VERSION } from '../engine/version.ts'
import type { StoredDocument } from '../store/document-store.ts'
import type { NewForecast, StoredForecast } from '../store/forecast-store.ts'
import type { Needs } from './api.ts'
import { find, findRace } from './find.ts'
import { named, routesOf } from './gather.ts'
import { heldOf } from './held-readings.ts'

/** Stored documents of a forecast, each in one version. */
export interface Gathered {
  race: StoredDocument
  car: StoredDocument
  sky: StoredDocument
  routes: Map<string, StoredDocument>
}

/** How the documents are driven. */
export interface Wanted {
  speeds: unknown
  date?: string
  /** Where in the middle of a day it begins, and where it ends before its road does. */
  from?: unknown
  until?: unknown
}

/** The versions of all that was gathered, in one order. */
export const versionsOf = ({ race, car, sky, routes }: Gathered) => [
  race.version,
  car.version,
  sky.version,
  [...routes].map(([id, { version }]) => `${id} ${version}`).sort((a, b) => (a < b ? -1 : 1)),
]

/**
 * The documents that a request names, as they are now.
 *
 * @throws Fault 'no-such-document', 'missing-document' or 'missing-route'
 */
export async function gather(
  { store }: Needs,
  raceId: string,
  of: { carId: string; skyId: string },
): Promise<Gathered> {
  const { stored, race } = await findRace(store, raceId)
  const [car, sky, routes] = await Promise.all([
    named(store, 'car', of.carId, 'carId'),
    named(store, 'sky', of.skyId, 'skyId'),
    routesOf(store, race, {}),
  ])
  return { race: stored, car, sky, routes }
}

/** The documents that a forecast was made from, in the versions that it used. */
export async function gatherAgain({ store }: Needs, made: StoredForecast): Promise<Gathered> {
  const { raceId, raceVersion, carId, carVersion, skyId, skyVersion, routeVersions } = made
  const [race, car, sky, ...roads] = await Promise.all([
    find(store, 'race', raceId, raceVersion),
    find(store, 'car', carId, carVersion),
    find(store, 'sky', skyId, skyVersion),
    ...Object.entries(routeVersions).map(([id, version]) => find(store, 'route', id, version)),
  ])
  return { race, car, sky, routes: new Map(roads.map((road) => [road.id, road])) }
}

/**
 * The forecast of stored documents with the losses that the race's readings show: made once for the same inputs
 * and engine, kept, never changed.
 */
export async function makeForecast(
  needs: Needs,
  { race, car, sky, routes }: Gathered,
  wanted: Wanted,
  signal?: AbortSignal,
): Promise<{ forecast: StoredForecast; isNew: boolean }> {
  const { store, compute } = needs
  const inputs = await inputsOf(needs, { race, car, sky, routes }, wanted, signal)
  const inputsHash = await compute.run('inputs-hash', inputs, signal)
  const made = {
    raceId: race.id,
    raceVersion: race.version,
    carId: car.id,
    carVersion: car.version,
    skyId: sky.id,
    skyVersion: sky.version,
    routeVersions: Object.fromEntries([...routes].map(([id, route]) => [id, route.version])),
    speeds: wanted.speeds,
    from: wanted.from ?? null,
    until: wanted.until ?? null,
    inputsHash,
    engineVersion: ENGINE_VERSION,
  }
  const id = idOf(made)
  const before = await store.forecasts.get(id)
  if (before !== null) return { forecast: before, isNew: false }
  const budget: unknown = JSON.parse(await compute.run('forecast', inputs, signal))
  const { createdAt } = await store.forecasts.save({ id, ...made, budget })
  return { forecast: { id, createdAt, ...made, budget }, isNew: true }
}

/** The documents with the losses that the race's readings show. */
async function inputsOf(needs: Needs, gathered: Gathered, wanted: Wanted, signal?: AbortSignal) {
  const { speeds, date, from, until } = wanted
  const { race, car, sky, routes } = gathered
  const bodies = Object.fromEntries([...routes].map(([id, route]) => [id, route.body]))
  const learned = await learnedLosses(needs, race.id, car, signal)
  return { car: car.body, race: race.body, sky: sky.body, routes: bodies, speeds, date, from, until, learned }
}

/** All that a stored forecast's day is worked out from, its documents in the versions that it used. */
export const inputsAgain = async (needs: Needs, made: StoredForecast, date: string, signal?: AbortSignal) =>
  inputsOf(needs, await gatherAgain(needs, made), { ...drivenAs(made), date }, signal)

/** How a stored forecast is driven. */
export const drivenAs = ({ speeds, from, until }: Pick<StoredForecast, 'speeds' | 'from' | 'until'>): Wanted => ({
  speeds,
  from: from ?? undefined,
  until: until ?? undefined,
})

/** Losses that a race's forecasts use in place of the car's own; undefined where its bench holds. */
export async function learnedLosses(
  { store, compute }: Needs,
  raceId: string,
  car: StoredDocument,
  signal?: AbortSignal,
): Promise<LearnedLosses | undefined> {
  const { which, widen } = await store.beliefs.uses(raceId)
  if (which === 'bench') return undefined
  const counting = (await heldOf(store, raceId, car.id)).filter(({ counts }) => counts).map(({ reading }) => reading)
  if (counting.length === 0) return undefined
  const learned = await compute.run('learn', { car: car.body, counting, widen }, signal)
  return Object.keys(learned).length === 0 ? undefined : learned
}

/** A UUID (version 8, RFC 9562) made of what the forecast is made of, so that a repeat finds it. */
function idOf(made: Omit<NewForecast, 'budget'>): string {
  const { raceId, raceVersion, carId, carVersion, skyId, skyVersion, routeVersions, inputsHash, engineVersion } = made
  const routes = Object.entries(routeVersions).sort(([a], [b]) => (a < b ? -1 : 1))
  const parts = [raceId, raceVersion, carId, carVersion, skyId, skyVersion, routes, inputsHash, engineVersion]
  const hex = createHash('sha256').update(JSON.stringify(parts)).digest('hex')
  const variant = '89ab'[Number.parseInt(hex[16], 16) % 4]
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-8${hex.slice(13, 16)}-${variant}${hex.slice(17, 20)}-${hex.slice(20, 32)}`
}
