import type { JudgementDocument } from '../documents/judgement.ts'
import type { ReadingDocument } from '../documents/reading.ts'
import { Fault } from '../errors.ts'
import { dayTopic } from '../live/topics.ts'
import type { StoredDocument } from '../store/document-store.ts'
import type { Store } from '../store/store.ts'
import type { Needs } from './api.ts'
import { type Cause, makeAnew, type Moved } from './followed.ts'
import { named } from './gather.ts'
import { heldOf, keptOf } from './held-readings.ts'

export interface Taking {
  raceId: string
  readings: ReadingDocument[]
  isBatch: boolean
  /** Asked for by name; else the car of the budget that is followed. */
  carId: string | undefined
  by: string | null
}

export interface Taken {
  items: (JudgementDocument & { id: string })[]
  moved: Moved[]
  isNew: boolean
}

/**
 * Keeps readings, says what they show and makes the followed budgets anew. What was kept before stays as it is.
 *
 * @throws Fault 'reading-taken' when an id is kept with other content; nothing of the request is kept then
 */
export async function takeReadings(needs: Needs, taking: Taking): Promise<Taken> {
  const { store } = needs
  const { raceId, readings, by } = taking
  await refuseTaken(store, taking)
  const known = new Set((await store.readings.list(raceId)).map(({ id }) => id))
  const fresh = onceEach(readings).filter(({ id }) => !known.has(id))
  if (fresh.length > 0) await keep(needs, taking, fresh)
  const last = (fresh.at(-1) ?? readings[readings.length - 1]).id
  const moved = await makeAnew(needs, raceId, { cause: 'reading', readingId: last, by })
  const items = await Promise.all(readings.map(({ id }) => said(store, raceId, id)))
  return { items, moved, isNew: fresh.length > 0 }
}

const onceEach = (readings: ReadingDocument[]): ReadingDocument[] => [
  ...new Map(readings.map((reading) => [reading.id, reading])).values(),
]

async function said(store: Store, raceId: string, id: string): Promise<JudgementDocument & { id: string }> {
  const stored = await store.readings.get(raceId, id)
  if (stored === null) throw new Fault('internal', `The reading ${id} was not kept.`)
  const {
    reading: _,
    carId: _car,
    carVersion: _version,
    receivedAt: _at,
    isSetAside: _mark,
    ...judgement
  } = keptOf(stored)
  return { id, ...judgement }
}

/** Keeps nothing: the store compares what is there already with what came. */
async function refuseTaken(store: Store, { raceId, readings, isBatch, by }: Taking): Promise<void> {
  for (const [n, reading] of readings.entries()) {
    const within = readings.slice(0, n).find(({ id }) => id === reading.id)
    const stored = await store.readings.get(raceId, reading.id)
    const where = isBatch ? `readings[${n}].` : ''
    if (within !== undefined && JSON.stringify(within) !== JSON.stringify(reading)) throw taken(reading, `${where}id`)
    if (stored === null) continue
    const { carId, carVersion, judgement } = stored
    const outcome = await store.readings.add({ raceId, reading, carId, carVersion, judgement, by })
    if ('conflict' in outcome) throw taken(reading, `${where}${outcome.conflict}`)
  }
}

const taken = ({ id }: ReadingDocument, field: string): Fault =>
  new Fault('reading-taken', `The id ${id} is kept with another ${field}; a reading never changes, so send a new id.`, {
    errors: [{ field, detail: `expected what the reading ${id} was kept with` }],
  })

async function keep(needs: Needs, taking: Taking, fresh: ReadingDocument[]): Promise<void> {
  const { store, compute, live } = needs
  const { raceId, isBatch, by } = taking
  const car = await carOf(store, taking)
  const [{ widen }, before] = await Promise.all([store.beliefs.uses(raceId), heldOf(store, raceId, car.id)])
  const judged = before.map(({ reading, verdict, counts }) => ({ reading, judgement: { verdict, counts } }))
  const { judgements, again } = await compute.run('judge-readings', {
    car: car.body,
    before: judged,
    fresh,
    widen,
    isBatch,
  })
  for (const [n, reading] of fresh.entries()) {
    await store.readings.add({ raceId, reading, carId: car.id, carVersion: car.version, judgement: judgements[n], by })
  }
  for (const { id, judgement } of again) await store.readings.judge(raceId, id, judgement)
  const news = [
    ...fresh.map(({ id, tracker }, n) => ({ id, tracker, verdict: judgements[n].verdict, isSetAside: false })),
    ...again.map(({ id, judgement }) => ({ id, tracker: null, verdict: judgement.verdict, isSetAside: false })),
  ]
  for (const one of news) await tellDays({ store, live }, raceId, one)
}

/** Tells every stream of a race's followed days of a reading. */
export async function tellDays(
  { store, live }: Pick<Needs, 'store' | 'live'>,
  raceId: string,
  news: { id: string; isSetAside: boolean },
): Promise<void> {
  for (const { date } of await store.choices.list(raceId)) await live.publish(dayTopic(raceId, date), 'reading', news)
}

/** The car that was read: asked for by name, else the one followed on the first reading's day, else on any, else the only one. */
async function carOf(store: Store, { raceId, readings, carId }: Taking): Promise<StoredDocument> {
  if (carId !== undefined) return named(store, 'car', carId, 'car')
  const followed = await store.choices.list(raceId)
  const onDay = followed.find(({ date }) => readings[0].at.startsWith(date)) ?? followed.at(-1)
  if (onDay !== undefined) return named(store, 'car', onDay.carId, 'car')
  const cars = await store.documents.list('car')
  if (cars.length === 1) return named(store, 'car', cars[0].id, 'car')
  throw new Fault('missing-document', 'Several cars are stored and none is followed: say which was read.', {
    errors: [{ field: 'car', detail: `expected one of ${cars.map(({ id }) => id).join(', ') || 'the stored cars'}` }],
  })
}

/** Sets a reading aside or takes it back, and makes the followed budgets anew. */
export async function markReading(
  needs: Needs,
  { raceId, id, isSetAside, by }: { raceId: string; id: string; isSetAside: boolean; by: string | null },
): Promise<Moved[]> {
  const { store } = needs
  const before = await store.readings.get(raceId, id)
  if (before === null) throw new Fault('no-such-reading', `There is no reading ${id} of the race "${raceId}".`)
  if (before.isSetAside !== isSetAside) {
    await store.readings.mark(raceId, id, isSetAside, by)
    await tellDays(needs, raceId, { id, isSetAside })
  }
  const cause: Cause = { cause: isSetAside ? 'set-aside' : 'take-back', readingId: id, by }
  return makeAnew(needs, raceId, cause)
}

/** The races whose readings are being taken, each one after the other: every reading is judged by those before it. */
export function inTurn(): <T>(raceId: string, work: () => Promise<T>) => Promise<T> {
  const last = new Map<string, Promise<unknown>>()
  return async (raceId, work) => {
    const turn = (last.get(raceId) ?? Promise.resolve()).then(work, work)
    last.set(raceId, turn)
    const forget = (): void => void (last.get(raceId) === turn && last.delete(raceId))
    turn.then(forget, forget)
    return turn
  }
}
