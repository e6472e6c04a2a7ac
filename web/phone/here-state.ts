import { batch, signal } from '@preact/signals'
import type { WhatIfDocument } from '../../server/documents/what-if.ts'
import type { DayItem, Refusal } from '../api.ts'
import type { PlanDocument } from '../plan-types.ts'
import { typedPct } from '../plan-words.ts'
import { worked } from '../state.ts'
import { changeOf, type DayAnswer, planOf } from './ask-day.ts'
import type { Whose } from './fetch-documents.ts'
import { type HereForm, hereBy, hereOf } from './here-form.ts'
import type { DayQuestion, Progress, RaceDocuments } from './questions.ts'
import { lastHere, rememberHere } from './remembered-here.ts'
import type { Moved } from './what-if-form.ts'

/** A day of a race with a car and a sky. */
export interface HereDay extends Whose {
  date: string
}

/** Where the form's figures come from. */
export type FormSource = 'budget' | 'typed' | 'nothing'

export const form = signal<{ day: string; of: HereForm; source: FormSource }>({
  day: '',
  of: { stage: '', km: '', time: '', chargePct: '', speedKmh: '0', stopLeftMin: '' },
  source: 'nothing',
})
export const wantedText = signal('')
export const planned = signal<DayAnswer<PlanDocument> | null>(null)
export const planRefusal = signal<Refusal | null>(null)
/** How far the plan being worked out is; null while none is. */
export const work = signal<(Progress & { sinceMs: number }) | null>(null)
export const moved = signal<Moved>({})
export const changed = signal<DayAnswer<WhatIfDocument> | null>(null)
export const changeRefusal = signal<Refusal | null>(null)
export const isChanging = signal(false)

/** The day as the service listed it, or as the documents on this phone say. */
export function dayItemOf(days: DayItem[], kept: RaceDocuments | undefined, date: string): DayItem | null {
  const listed = days.find((day) => day.date === date)
  if (listed !== undefined) return listed
  const day = kept?.race.days.find((one) => one.date === date)
  return day === undefined || kept === undefined ? null : { ...day, zone: day.zone ?? kept.race.zone }
}

/** Takes up a day: what was typed last on this phone, else where the budget shown has the car. */
export function takeUp(day: HereDay, item: DayItem | null): void {
  const key = [day.race, day.date, item === null].join(' ')
  if (form.value.day === key) return
  const last = lastHere(day.race, day.date)
  batch(() => {
    form.value = { day: key, of: last ?? form.value.of, source: last === null ? 'nothing' : 'typed' }
    if (last === null && item !== null) fillIn(item)
    planned.value = null
    planRefusal.value = null
    changed.value = null
    changeRefusal.value = null
    moved.value = {}
  })
}

/** Puts the car where the budget shown has it now, or at the start of the first stage. */
export function fillIn(item: DayItem): void {
  const budget = worked.value?.day
  const { day, of } = form.value
  const isOf = budget?.date === item.date
  const start = { ...of, stage: item.stages[0]?.id ?? '', km: '0', time: item.driving.from.slice(0, 5) }
  form.value = {
    day,
    of: budget !== undefined && isOf ? hereBy(budget, item.stages, Date.now()) : start,
    source: isOf ? 'budget' : 'nothing',
  }
}

export function type(change: Partial<HereForm>, { race, date }: HereDay): void {
  const { day, of } = form.value
  form.value = { day, of: { ...of, ...change }, source: 'typed' }
  rememberHere(race, date, form.value.of)
}

/** What the form asks; null where a field cannot be read. */
export function question(item: DayItem): DayQuestion | null {
  const from = hereOf(form.value.of, item)
  const pct = typedPct(wantedText.value)
  if (from === null || pct === undefined) return null
  return { date: item.date, from, ...(pct === null ? {} : { targetPct: pct }) }
}

/** Plans the rest of the day. */
export async function planHere(day: HereDay, item: DayItem): Promise<void> {
  const asked = question(item)
  if (asked === null) return
  const sinceMs = Date.now()
  batch(() => {
    work.value = { step: 'Asking the service', share: 0, sinceMs }
    planRefusal.value = null
  })
  const answered = await planOf<PlanDocument>(day, asked, (progress) => (work.value = { ...progress, sinceMs }))
  if (answered === null) return
  batch(() => {
    work.value = null
    if (answered.refusal === undefined) planned.value = answered.answer
    planRefusal.value = answered.refusal ?? null
  })
}

/** Asks what the sliders would do to the rest of the day. */
export async function askChange(day: HereDay, item: DayItem): Promise<void> {
  const asked = question(item)
  if (asked === null) return
  const variants = [{ name: 'Changed', change: moved.value }]
  isChanging.value = true
  const answered = await changeOf<WhatIfDocument>(day, { ...asked, variants })
  if (answered === null) return
  batch(() => {
    isChanging.value = false
    if (answered.refusal === undefined) changed.value = answered.answer
    changeRefusal.value = answered.refusal ?? null
  })
}
