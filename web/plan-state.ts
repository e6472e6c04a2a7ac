import { batch, signal } from '@preact/signals'
import type { Refusal } from './api.ts'
import { planNews } from './crew-state.ts'
import { type PlanDay, planAtWork, planToShow } from './plan-pick.ts'
import type { PlanAnswer, PlanEntry, PlanNews, Wanted } from './plan-types.ts'
import { cancelPlan, orderPlan, planOf, plansOf } from './plans.ts'
import { typedPct } from './plan-words.ts'

export interface RacePlanDay extends PlanDay {
  race: string
}

/** A plan being worked out. */
export interface AtWork extends RacePlanDay {
  id: string
  step: string
  /** 0..1 */
  share: number
  sinceMs: number
}

export const plans = signal<{ race: string; items: PlanEntry[] } | null>(null)
export const opened = signal<PlanAnswer | null>(null)
export const atWork = signal<AtWork | null>(null)
export const planRefusal = signal<Refusal | null>(null)
/** What became of the last order where it gave no plan. */
export const ended = signal('')
export const targetText = signal('')
export const promisePct = signal(5)
/** Whether the steady speeds of the opened plan are looked at and published. */
export const isSteady = signal(false)

const ASK_AGAIN_MS = 3000
const bodies = new Map<string, PlanAnswer>()

/** What is wanted by the form; a target that cannot be read is left out. */
export function wants(): Wanted {
  const pct = typedPct(targetText.value)
  return { ...(typeof pct === 'number' ? { targetPct: pct } : {}), promisePct: promisePct.value }
}

const keyOf = ({ race, date, carId, skyId }: RacePlanDay): string => [race, date, carId, skyId].join(' ')
let shownDay = ''

/** Reads the race's plans and opens the one to show; one that is being worked on is watched. */
export async function loadPlans(day: RacePlanDay): Promise<void> {
  const key = keyOf(day)
  if (key !== shownDay)
    batch(() => {
      opened.value = null
      ended.value = ''
      planRefusal.value = null
    })
  shownDay = key
  const answer = await plansOf(day.race)
  if (shownDay !== key) return
  if (answer.value === undefined) {
    planRefusal.value = answer.refusal
    return
  }
  plans.value = { race: day.race, items: answer.value }
  const working = planAtWork(answer.value, day)
  if (working !== null && atWork.value?.id !== working.id) watch(day, working)
  if (opened.value !== null) return
  const found = planToShow(answer.value, day, wants())
  if (found !== null) await openPlan(found.id)
}

/** Opens a kept plan. */
export async function openPlan(id: string): Promise<void> {
  const known = bodies.get(id)
  const key = shownDay
  const answer = known === undefined ? await planOf(id) : { value: known }
  if (shownDay !== key) return
  if (answer.value === undefined) planRefusal.value = answer.refusal
  else take(answer.value)
}

function take(plan: PlanAnswer): void {
  if (plan.state === 'done') bodies.set(plan.id, plan)
  batch(() => {
    planRefusal.value = null
    if (plan.state === 'done') {
      if (plan.id !== opened.value?.id) isSteady.value = false
      opened.value = plan
    }
    if (plan.state === 'failed') ended.value = `Not planned. ${plan.fault?.detail ?? ''}`
    if (plan.state === 'cancelled') ended.value = 'Taken back: nothing was planned.'
  })
}

/** Orders a plan of the day; one that is there already shows at once. */
export async function order(day: RacePlanDay): Promise<void> {
  const { race, carId, skyId, date } = day
  ended.value = ''
  const answer = await orderPlan({ race, carId, skyId, date, ...wants() })
  if (answer.value === undefined) planRefusal.value = answer.refusal
  else if (answer.value.state === 'working') watch(day, answer.value)
  else {
    take(answer.value)
    await loadPlans(day)
  }
}

function watch(day: RacePlanDay, { id, startedAt }: PlanEntry): void {
  planRefusal.value = null
  atWork.value = { ...day, id, step: 'Waiting its turn', share: 0, sinceMs: Date.parse(startedAt) }
  hear()
  setTimeout(() => void look(id), ASK_AGAIN_MS)
}

/** Asks for a plan that is worked on, in case that the stream's word of its end was lost. */
async function look(id: string, isOver = false): Promise<void> {
  const watched = atWork.value
  if (watched?.id !== id) return
  const { value } = await planOf(id)
  if (atWork.value?.id !== id) return
  if (value === undefined || value.state === 'working') {
    if (!isOver) setTimeout(() => void look(id), ASK_AGAIN_MS)
    return
  }
  atWork.value = null
  if (keyOf(watched) !== shownDay) return
  take(value)
  await loadPlans(watched)
}

/** Takes up what the day's stream told last of the plan that is worked on. */
export function hear(): void {
  if (planNews.value === '') return
  const { planId, state, step, share }: PlanNews = JSON.parse(planNews.value)
  const watched = atWork.peek()
  if (watched?.id !== planId) return
  if (state !== 'working') void look(planId, true)
  else if (step !== undefined && share !== undefined) atWork.value = { ...watched, step, share }
}

/** Takes the order back. */
export async function takeBack(id: string): Promise<void> {
  const answer = await cancelPlan(id)
  if (answer.value === undefined) planRefusal.value = answer.refusal
  else await look(id)
}
