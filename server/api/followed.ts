import { z } from 'zod'
import { budgetDocument, type DayBudget } from '../documents/budget.ts'
import { ENGINE_VERSION } from '../engine/version.ts'
import { ERRORS, Fault } from '../errors.ts'
import { dayTopic } from '../live/topics.ts'
import type { StoredChoice } from '../store/choice-store.ts'
import type { StoredForecast } from '../store/forecast-store.ts'
import type { MoveCause } from '../store/move-store.ts'
import type { Store } from '../store/store.ts'
import type { Needs } from './api.ts'
import { readingsOf } from './held-readings.ts'
import { gatherAgain, makeForecast, type Wanted } from './make-forecast.ts'

export const moved = z.strictObject({
  date: z.string().describe('the day whose budget moved'),
  pointsPct: z.record(z.string(), z.number()).describe('efficiency over the day, by tracker [points]'),
  closingWhBefore: z.number().describe('closing balance before [Wh]'),
  closingWhAfter: z.number().describe('closing balance now [Wh]'),
  movedWh: z.number().describe('the one less the other [Wh]'),
})

export type Moved = z.output<typeof moved>

/** What moved the budgets, and who did it. */
export interface Cause {
  cause: MoveCause
  readingId: string | null
  by: string | null
}

/**
 * What the crew follows on a day, and the newest forecast of it.
 *
 * @throws Fault 'nothing-followed'
 */
export const followed = (store: Store, raceId: string, date: string) =>
  followedAs(store, { raceId, date }, (id) => store.forecasts.get(id))

/** The same for handing on, its budget not read. */
export const followedText = (store: Store, raceId: string, date: string) =>
  followedAs(store, { raceId, date }, (id) => store.forecasts.text(id))

async function followedAs<F>(
  store: Store,
  { raceId, date }: { raceId: string; date: string },
  get: (forecastId: string) => Promise<F | null>,
): Promise<{ choice: StoredChoice; forecast: F }> {
  const choice = await store.choices.get(raceId, date)
  const forecast = choice === null ? null : await get(choice.forecastId)
  if (choice !== null && forecast !== null) return { choice, forecast }
  throw new Fault('nothing-followed', `No budget is followed on ${date} yet; a planner chooses car, sky and speeds.`)
}

/** The one day of a forecast's budget. */
export function dayIn({ budget }: StoredForecast, date: string): DayBudget | null {
  const read = budgetDocument.safeParse(budget)
  return read.data?.days.find((day) => day.date === date) ?? null
}

/** Whether a day's followed budget is made with what the readings of its car show. */
export async function isLearned({ store }: Needs, raceId: string, carId: string): Promise<boolean> {
  const [{ which }, readings] = await Promise.all([store.beliefs.uses(raceId), readingsOf(store, raceId)])
  return which === 'learned' && readings.some((kept) => kept.carId === carId && kept.counts && !kept.isSetAside)
}

/** Most rounds in which another process may add readings under our hands. */
const MOST_ROUNDS = 3

/**
 * Makes every followed budget of a race anew after its readings or their use have changed, and tells those who
 * listen. Documents stay in the versions that were followed, so that what moved is the cause's alone.
 */
export async function makeAnew(needs: Needs, raceId: string, cause: Cause): Promise<Moved[]> {
  const all = new Map<string, Moved>()
  for (let round = 0; round < MOST_ROUNDS; round++) {
    const state = await stateOf(needs.store, raceId)
    for (const choice of await needs.store.choices.list(raceId)) {
      const one = await dayAnew(needs, raceId, choice, cause)
      if (one !== null) all.set(choice.date, one)
    }
    if (state === (await stateOf(needs.store, raceId))) break
  }
  return [...all.values()]
}

/** Makes every followed budget anew that another engine made; one that no longer can be stays as it is. */
export async function renewOutdated(needs: Needs): Promise<void> {
  for (const raceId of await needs.store.choices.outdated(ENGINE_VERSION))
    await makeAnew(needs, raceId, { cause: 'engine', readingId: null, by: null })
}

/** All that budgets are made anew for, as text. */
async function stateOf(store: Store, raceId: string): Promise<string> {
  const [uses, readings] = await Promise.all([store.beliefs.uses(raceId), readingsOf(store, raceId)])
  return JSON.stringify([uses, readings.map(({ reading, counts, isSetAside }) => [reading.id, counts, isSetAside])])
}

async function dayAnew(needs: Needs, raceId: string, choice: StoredChoice, cause: Cause): Promise<Moved | null> {
  const { store } = needs
  const before = await store.forecasts.get(choice.forecastId)
  if (before === null) return null
  const { date, speeds, until, version } = choice
  const made = await anew(needs, before, { speeds, date, until: until ?? undefined })
  if (made === null || made.id === before.id) return null
  if (!(await store.choices.setForecast(raceId, date, version, made.id))) return null
  return told(needs, { raceId, date, before, after: made }, cause)
}

/** Null where the documents no longer give a forecast: the budget that is followed stays. */
async function anew(needs: Needs, before: StoredForecast, wanted: Wanted) {
  try {
    return (await makeForecast(needs, await gatherAgain(needs, before), wanted)).forecast
  } catch (error) {
    if (error instanceof Fault && ERRORS[error.code].status < 500) return null
    throw error
  }
}

/** Writes down what moved a day's budget and tells those who listen; null where there was none before. */
export async function told(
  { store, live }: Needs,
  day: { raceId: string; date: string; before: StoredForecast | null; after: StoredForecast },
  cause: Cause,
): Promise<Moved | null> {
  const { raceId, date, after } = day
  const was = day.before === null ? null : dayIn(day.before, date)
  const is = dayIn(after, date)
  if (is === null) return null
  const change = was === null ? null : moveBetween(was, is)
  await store.moves.add({
    raceId,
    date,
    ...cause,
    pointsPct: change?.pointsPct ?? {},
    closingWhBefore: was?.closing.wh ?? null,
    closingWhAfter: is.closing.wh,
    forecastId: after.id,
  })
  const { id: forecastId, createdAt: madeAt } = after
  const { readingId } = cause
  const movedWh = change?.movedWh ?? null
  await live.publish(dayTopic(raceId, date), 'forecast', {
    forecastId,
    madeAt,
    closingWh: is.closing.wh,
    movedWh,
    cause: cause.cause,
    readingId,
  })
  return change
}

/** What two budgets of a day differ by. */
export function moveBetween(before: DayBudget, after: DayBudget): Moved {
  const meanPct = ({ inputWh, lossWh }: DayBudget['trackers'][number]): number =>
    inputWh > 0 ? 100 * (1 - lossWh / inputWh) : 0
  const points = after.trackers.flatMap((tracker) => {
    const was = before.trackers.find(({ name }) => name === tracker.name)
    return was === undefined ? [] : [[tracker.name, meanPct(tracker) - meanPct(was)] as const]
  })
  return {
    date: after.date,
    pointsPct: Object.fromEntries(points),
    closingWhBefore: before.closing.wh,
    closingWhAfter: after.closing.wh,
    movedWh: after.closing.wh - before.closing.wh,
  }
}
