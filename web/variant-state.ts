import { batch, signal } from '@preact/signals'
import type { WhatIfDocument } from '../server/documents/what-if.ts'
import { documentOf, type Kind, type Refusal } from './api.ts'
import { variantNews } from './crew-state.ts'
import { changeOf } from './phone/ask-day.ts'
import { documentsOf, fetchDocuments, type Whose } from './phone/fetch-documents.ts'
import type { Moved } from './phone/what-if-form.ts'
import type { PlanAnswer } from './plan-types.ts'
import type { KeptVariant, VariantInput, VariantNews } from './variant-types.ts'
import { changesText, patchBetween } from './variant-words.ts'
import { cancelVariant, orderVariant, variantsOf } from './variants.ts'

/** Variants of the plan that is opened, oldest first. */
export const variants = signal<{ plan: string; items: KeptVariant[] }>({ plan: '', items: [] })
/** The one whose causes are looked at. */
export const looked = signal('')
export const variantRefusal = signal<Refusal | null>(null)
/** How far each variant is that is worked on, as the stream told it. */
export const steps = signal<Record<string, VariantNews>>({})
export const moved = signal<Moved>({})
export const quick = signal<WhatIfDocument | null>(null)
export const quickRefusal = signal<Refusal | null>(null)
export const isAsking = signal(false)

const ASK_AGAIN_MS = 3000
let timer: ReturnType<typeof setTimeout> | undefined

/** Takes up another plan: its variants are read, what was tried on the one before is put away. */
export async function loadVariants(planId: string): Promise<void> {
  if (variants.value.plan !== planId)
    batch(() => {
      variants.value = { plan: planId, items: [] }
      looked.value = ''
      variantRefusal.value = null
      moved.value = {}
      quick.value = null
      quickRefusal.value = null
    })
  clearTimeout(timer)
  const { value, refusal } = await variantsOf(planId)
  if (variants.value.plan !== planId) return
  if (value === undefined) variantRefusal.value = refusal
  else variants.value = { plan: planId, items: inOrder(value) }
  // In case that the stream's word of its end was lost.
  if (variants.value.items.some(({ state }) => state === 'working'))
    timer = setTimeout(() => void loadVariants(planId), ASK_AGAIN_MS)
}

/** As they were begun, without those taken back. */
const inOrder = (items: KeptVariant[]): KeptVariant[] =>
  items.filter(({ state }) => state !== 'cancelled').sort((a, b) => (a.startedAt < b.startedAt ? -1 : 1))

/** Takes up what the day's stream told last of a variant. */
export function hearVariant(): void {
  if (variantNews.value === '') return
  const told: VariantNews = JSON.parse(variantNews.value)
  steps.value = { ...steps.peek(), [told.variantId]: told }
  const { plan, items } = variants.peek()
  if (told.state !== 'working' && items.some(({ id }) => id === told.variantId)) void loadVariants(plan)
}

/** Orders a variant in full beside the plan. */
export async function workOut(planId: string, variant: VariantInput): Promise<void> {
  variantRefusal.value = null
  const { value, refusal } = await orderVariant(planId, variant)
  if (value === undefined) variantRefusal.value = refusal
  else {
    looked.value = value.id
    await loadVariants(planId)
  }
}

/** Orders what the sliders stand at. */
export const workOutMoved = (planId: string): Promise<void> =>
  workOut(planId, { name: changesText(moved.value), change: moved.value })

/** Orders another stored car or sky in place of the plan's. */
export async function workOutOther(plan: PlanAnswer, kind: Kind & ('cars' | 'skies'), id: string): Promise<void> {
  const [own, other] = await Promise.all([
    documentOf(kind, kind === 'cars' ? plan.carId : plan.skyId),
    documentOf(kind, id),
  ])
  if (own.value === undefined || other.value === undefined) {
    variantRefusal.value = own.refusal ?? other.refusal ?? null
    return
  }
  const patch = patchBetween(own.value.document, other.value.document)
  const of = kind === 'cars' ? { car: patch } : { sky: patch }
  await workOut(plan.id, { name: other.value.name, ...of })
}

export async function takeBack(id: string): Promise<void> {
  const { refusal } = await cancelVariant(id)
  if (refusal !== undefined) variantRefusal.value = refusal
  await loadVariants(variants.value.plan)
}

const whoseOf = ({ raceId, carId, skyId }: PlanAnswer): Whose => ({ race: raceId, car: carId, sky: skyId })

const questionOf = ({ date, wanted: { targetPct } }: PlanAnswer, change: Moved) => ({
  date,
  ...(targetPct === undefined ? {} : { targetPct }),
  variants: [{ name: 'Moved', change }],
})

/** Lets this device plan the day once, so that the first slider is answered as quickly as the next. */
export async function prepareQuick(plan: PlanAnswer): Promise<void> {
  const whose = whoseOf(plan)
  await fetchDocuments(whose)
  if ((await documentsOf(whose)) === null) return
  if (Object.keys(moved.value).length > 0) await askQuick(plan)
  else await changeOf<WhatIfDocument>(whose, questionOf(plan, {}))
}

/** Asks quickly what the sliders do to the plan; the last question counts. */
export async function askQuick(plan: PlanAnswer): Promise<void> {
  const asked = moved.value
  isAsking.value = true
  const answered = await changeOf<WhatIfDocument>(whoseOf(plan), questionOf(plan, asked))
  if (answered === null || moved.value !== asked) return
  batch(() => {
    isAsking.value = false
    quick.value = answered.answer?.value ?? null
    quickRefusal.value = answered.refusal ?? null
  })
}
