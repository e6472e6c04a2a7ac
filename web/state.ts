import { batch, computed, effect, signal, untracked } from '@preact/signals'
import type { BudgetDocument, DayBudget } from '../server/documents/budget.ts'
import type { FollowedChoice } from './crew-types.ts'
import type { RaceDay } from './crew.ts'
import type { SpeedsInput } from '../server/documents/speeds.ts'
import {
  type Answer,
  budgetOf,
  contact,
  type DayItem,
  daysOf,
  isServiceUp,
  type Item,
  type Kind,
  listOf,
  type Refusal,
} from './api.ts'
import { type Choice, choiceOf, dayToShow, hashOf, isSame } from './choice.ts'
import { standing } from './session.ts'
import { followedBudget } from './crew.ts'
import { followedOn, loadFollowed, news, planNews, variantNews } from './crew-state.ts'
import { listenTo } from './live.ts'
import { stageId, tick } from './shown.ts'

/** A budget with the moment it came and the question it answers. */
export interface Worked {
  budget: BudgetDocument
  day: DayBudget
  atMs: number
  question: string
}

export const choice = signal<Choice>(choiceOf(location.hash))
export const lists = signal<Record<Kind, Item[]> | null>(null)
const schedule = signal<{ race: string; days: DayItem[] }>({ race: '', days: [] })
export const days = computed(() => schedule.value.days)
export const worked = signal<Worked | null>(null)
/** The answer that a try of other speeds is compared with. */
export const before = signal<DayBudget | null>(null)
export const refusal = signal<Refusal | null>(null)
/** Since when an answer is being worked out; null when none is. */
export const workingSinceMs = signal<number | null>(null)
export const lastHeardMs = signal(Date.now())
export const isHeard = signal(true)

export const isComplete = computed(() => {
  const { race, car, sky, date } = choice.value
  return race !== '' && car !== '' && sky !== '' && date !== ''
})

/** Tries within this time belong together: they are compared with the answer before the first of them. */
const ONE_TRY_MS = 8000
const RETRY_MS = 5000

export function choose(change: Partial<Choice>): void {
  const next = { ...choice.value, ...change }
  choice.value = next
  const hash = hashOf(next)
  if (hash === location.hash) return
  if (change.view === undefined) history.replaceState(null, '', hash)
  else location.hash = hash
}

/** An address that names a car and its speeds says what to show; any other shows what the crew follows. */
let isOwnChoice = /[?&]car=/.test(location.hash) && !/[?&]speeds=/.test(location.hash)
let triedMs = 0

export function trySpeeds(speeds: SpeedsInput): void {
  if (Date.now() - triedMs > ONE_TRY_MS) before.value = worked.value?.day ?? null
  triedMs = Date.now()
  isOwnChoice = true
  choose({ speeds })
}

/** Loads the lists and fills what the choice leaves open with what there is. */
export async function loadLists(): Promise<void> {
  const kinds: Kind[] = ['races', 'cars', 'skies', 'routes']
  const answers = await Promise.all(kinds.map(listOf))
  const failed = answers.find((answer) => answer.refusal !== undefined)
  if (failed?.refusal !== undefined) {
    refusal.value = failed.refusal
    return
  }
  const [races, cars, skies, routes] = answers.map((answer) => answer.value ?? [])
  batch(() => {
    lists.value = { races, cars, skies, routes }
    standing.value = 'inside'
    refusal.value = null
    const { race, car, sky } = choice.value
    choose({ race: chosenOf(races, race), car: chosenOf(cars, car), sky: chosenOf(skies, sky) })
  })
}

const chosenOf = (items: Item[], id: string): string =>
  items.some((item) => item.id === id) ? id : (items[0]?.id ?? '')

async function loadDays(raceId: string): Promise<void> {
  if (raceId === '') {
    batch(() => {
      schedule.value = { race: '', days: [] }
      choose({ date: '' })
    })
    return
  }
  const answer = await daysOf(raceId)
  if (choice.value.race !== raceId) return
  if (answer.value === undefined) {
    refusal.value = answer.refusal
    return
  }
  batch(() => {
    schedule.value = { race: raceId, days: answer.value }
    choose({ date: dayToShow(answer.value, choice.value.date, Date.now()) })
  })
}

/** Shows the followed choice where nothing else was asked for; tells whether that changed the question. */
function takeUp(choiceFollowed: FollowedChoice | null | undefined): boolean {
  if (isOwnChoice || choiceFollowed === null || choiceFollowed === undefined) return false
  isOwnChoice = true
  if (isSame(choice.value, choiceFollowed)) return false
  show(choiceFollowed)
  return true
}

/** Shows what the crew follows. */
export const show = ({ carId: car, skyId: sky, speeds }: FollowedChoice): void => choose({ car, sky, speeds })

async function followedAnswer(day: RaceDay, signal: AbortSignal): Promise<Answer<BudgetDocument>> {
  const answer = await followedBudget(day, signal)
  return answer.value === undefined ? answer : { value: answer.value.budget }
}

/** Something happened on the day: reads what the crew follows, keeps to it where it was shown, asks again. */
async function hearNews(day: RaceDay): Promise<void> {
  const wasFollowing = isSame(choice.value, followedOn(day)?.choice)
  const now = await loadFollowed(day)
  news.value++
  if (wasFollowing && now !== null && now.choice !== null && !isSame(choice.value, now.choice)) show(now.choice)
  else askAgain()
}

let running: AbortController | null = null

/** Works out the budget of the choice; the figures before it stay until it is there. */
async function work(question: string): Promise<void> {
  running?.abort()
  const mine = new AbortController()
  running = mine
  const { race, car, sky, date, speeds }: Choice = JSON.parse(question)
  workingSinceMs.value = Date.now()
  const known = followedOn({ race, date }) ?? (await loadFollowed({ race, date }))
  if (mine.signal.aborted || takeUp(known?.choice)) return
  const answer = isSame(choice.value, known?.choice)
    ? await followedAnswer({ race, date }, mine.signal)
    : await budgetOf({ race: { id: race }, car: { id: car }, sky: { id: sky }, date, speeds }, mine.signal)
  if (mine.signal.aborted) return
  batch(() => {
    workingSinceMs.value = null
    const day = answer.value?.days.find((entry) => entry.date === date)
    if (answer.value !== undefined && day !== undefined) {
      if (!isSameTrip(worked.value, question)) before.value = null
      worked.value = { budget: answer.value, day, atMs: Date.now(), question }
      refusal.value = null
      if (!day.stages.some((stage) => stage.id === stageId.value)) stageId.value = null
    } else refusal.value = answer.refusal ?? noDay(date)
  })
}

const noDay = (date: string): Refusal => ({
  status: 0,
  code: 'no-day',
  title: 'The answer lacks this day',
  detail: `The budget holds no day ${date}.`,
  errors: [],
})

function isSameTrip(last: Worked | null, question: string): boolean {
  if (last === null) return false
  const [a, b] = [last.question, question].map((text) => {
    const { race, car, sky, date }: Choice = JSON.parse(text)
    return [race, car, sky, date].join(' ')
  })
  return a === b
}

const question = computed(() => {
  const { race, car, sky, date, speeds } = choice.value
  return isComplete.value ? JSON.stringify({ race, car, sky, date, speeds }) : ''
})

/** Bumped when a document behind the choice changed, so that the same question is asked again. */
const edition = signal(0)
export const askAgain = (): void => void edition.value++

export function start(): void {
  contact.heard = (heard) => {
    isHeard.value = heard
    if (heard) lastHeardMs.value = Date.now()
  }
  contact.unknown = () => (standing.value = 'outside')
  addEventListener('hashchange', () => (choice.value = { ...choice.value, ...choiceOf(location.hash) }))
  tick()
  setInterval(() => void listen(), RETRY_MS)
  const race = computed(() => choice.value.race)
  effect(() => {
    if (lists.value === null) return
    const raceId = race.value
    untracked(() => void loadDays(raceId))
  })
  effect(() => {
    const asked = question.value
    void edition.value
    const { race: known, days: items } = schedule.value
    const { race: wanted, date } = choice.peek()
    if (asked !== '' && known === wanted && items.some((day) => day.date === date)) untracked(() => void work(asked))
  })
  const day = computed(() => JSON.stringify([choice.value.race, choice.value.date]))
  effect(() => {
    const [race, date]: string[] = JSON.parse(day.value)
    if (standing.value !== 'inside' || race === '' || date === '') return undefined
    const work = { plan: planNews, variant: variantNews }
    return listenTo(
      { race, date },
      () => void hearNews({ race, date }),
      (kind, told) => void (work[kind].value = told),
    )
  })
  void loadLists()
}

/** After lost contact or a service that was too busy: asks until it answers, then takes up what was left undone. */
async function listen(): Promise<void> {
  if (isHeard.value && refusal.value?.status !== 503) return
  const answer = await isServiceUp()
  if (answer.refusal !== undefined) return
  if (lists.value === null) await loadLists()
  else askAgain()
}
