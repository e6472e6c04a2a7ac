import { batch, signal } from '@preact/signals'
import { documentOf, type Refusal } from './api.ts'
import { dateIn } from './format.ts'
import type { PlanNews } from './plan-types.ts'
import { NO_WISH, type RaceDate, type RaceWish, wantedBy, wishOf } from './race-wish.ts'
import { cancelRacePlan, orderRacePlan, raceEventsAt, racePlanOf, racePlansOf, type RaceSetting } from './race-plans.ts'
import type { RacePlanAnswer, RacePlanEntry } from './race-types.ts'

/** A race plan being worked out. */
export interface RaceAtWork extends RaceSetting {
  id: string
  step: string
  /** 0..1 */
  share: number
  sinceMs: number
}

export const opened = signal<RacePlanAnswer | null>(null)
export const atWork = signal<RaceAtWork | null>(null)
export const refusal = signal<Refusal | null>(null)
/** What became of the last order where it gave no plan. */
export const ended = signal('')
export const wish = signal<RaceWish>(NO_WISH)
/** The race's days with its own closing charges. */
export const raceDates = signal<RaceDate[]>([])
/** Day whose speeds are looked at; empty for the first. */
export const shownDate = signal('')

interface RaceBody {
  zone: string
  days: { date: string; targetPct?: number }[]
}

const ASK_AGAIN_MS = 3000
let shown = ''
let source: EventSource | null = null

const keyOf = ({ race, carId, skyId }: RaceSetting): string => [race, carId, skyId].join(' ')
const isOf = (setting: RaceSetting, { carId, skyId }: RacePlanEntry): boolean =>
  carId === setting.carId && skyId === setting.skyId

/** Reads the race, opens its newest plan with this car and sky, and watches one that is being worked on. */
export async function loadRacePlans(setting: RaceSetting): Promise<void> {
  const key = keyOf(setting)
  if (key !== shown)
    batch(() => {
      opened.value = null
      ended.value = ''
      refusal.value = null
      wish.value = NO_WISH
    })
  shown = key
  const [answer] = await Promise.all([racePlansOf(setting.race), loadDates(setting.race)])
  if (shown !== key) return
  if (answer.value === undefined) {
    refusal.value = answer.refusal
    return
  }
  const mine = answer.value.filter((entry) => isOf(setting, entry))
  const working = mine.find(({ state }) => state === 'working')
  if (working !== undefined && atWork.value?.id !== working.id) watch(setting, working)
  const done = mine.find(({ state }) => state === 'done')
  if (opened.value !== null || done === undefined) return
  const { value } = await racePlanOf(done.id)
  if (shown === key && value !== undefined) take(value)
}

/** Reads the race's days with their own closing charges. */
export async function loadDates(race: string): Promise<void> {
  const { value } = await documentOf('races', race)
  if (value === undefined) return
  const { zone, days }: RaceBody = JSON.parse(JSON.stringify(value.document))
  raceDates.value = days.map(({ date, targetPct }) => ({ date, targetPct: targetPct ?? null }))
  // While a race is under way, what is left of it is planned.
  const next = days.find(({ date }) => date >= dateIn(zone, Date.now()))
  if (wish.value === NO_WISH && next !== undefined) wish.value = { ...NO_WISH, fromDate: next.date }
}

function take(plan: RacePlanAnswer): void {
  batch(() => {
    refusal.value = null
    if (plan.state === 'done') {
      opened.value = plan
      wish.value = wishOf(plan.wanted)
    }
    if (plan.state === 'failed') ended.value = `Not planned. ${plan.fault?.detail ?? ''}`
    if (plan.state === 'cancelled') ended.value = 'Taken back: nothing was planned.'
  })
}

/** Orders what the form says; a plan that is there already shows at once. */
export async function orderRace(setting: RaceSetting): Promise<void> {
  const wanted = wantedBy(wish.value, raceDates.value)
  if (wanted === null) return
  ended.value = ''
  const answer = await orderRacePlan({ ...setting, ...wanted })
  if (answer.value === undefined) refusal.value = answer.refusal
  else if (answer.value.state === 'working') watch(setting, answer.value)
  else take(answer.value)
}

function watch(setting: RaceSetting, { id, startedAt }: RacePlanEntry): void {
  refusal.value = null
  atWork.value = { ...setting, id, step: 'Waiting its turn', share: 0, sinceMs: Date.parse(startedAt) }
  listen(setting.race)
  setTimeout(() => void look(id), ASK_AGAIN_MS)
}

/** Hears how far the work is, as long as there is any. */
function listen(race: string): void {
  source?.close()
  source = new EventSource(raceEventsAt(race))
  source.addEventListener('race-plan', ({ data }: MessageEvent<string>) => {
    const { planId, state, step, share }: PlanNews = JSON.parse(data)
    const watched = atWork.peek()
    if (watched?.id !== planId) return
    if (state !== 'working') void look(planId, true)
    else if (step !== undefined && share !== undefined) atWork.value = { ...watched, step, share }
  })
}

/** Asks for a plan that is worked on, in case that the stream's word of its end was lost. */
async function look(id: string, isOver = false): Promise<void> {
  const watched = atWork.value
  if (watched?.id !== id) return
  const { value } = await racePlanOf(id)
  if (atWork.value?.id !== id) return
  if (value === undefined || value.state === 'working') {
    if (!isOver) setTimeout(() => void look(id), ASK_AGAIN_MS)
    return
  }
  source?.close()
  source = null
  atWork.value = null
  if (keyOf(watched) === shown) take(value)
}

/** Takes the order back. */
export async function takeRaceBack(id: string): Promise<void> {
  const answer = await cancelRacePlan(id)
  if (answer.value === undefined) refusal.value = answer.refusal
  else await look(id)
}
