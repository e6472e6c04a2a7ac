import { createHash } from 'node:crypto'
import type { VariantDocument } from '../documents/variant.ts'
import type { VariantBase } from '../documents/variant-plan.ts'
import { ENGINE_VERSION } from '../engine/version.ts'
import { Fault } from '../errors.ts'
import { dayTopic } from '../live/topics.ts'
import type { PlanEntry } from '../store/plan-store.ts'
import type { NewVariant } from '../store/variant-store.ts'
import type { Needs } from './api.ts'
import { workVariant } from './work-variants.ts'

/** Variants of one plan, with all that the plan was made from. */
export interface VariantsOrder {
  plan: PlanEntry
  variants: VariantDocument[]
  /** A plan request. */
  request: unknown
}

/** Variants being worked out by this service. */
export interface VariantDesk {
  /** Starts each variant, unless it is done or worked on already. @returns their ids, in order */
  order(order: VariantsOrder): Promise<string[]>
  /** Takes a variant back that is being worked on. @returns whether it was */
  cancel(id: string): Promise<boolean>
  /** Ends when nothing is being worked on any more. */
  close(): Promise<void>
}

/** Bases kept, so that one variant after another needs no plan of the base again. */
const MOST_BASES = 4

/** A UUID (version 8, RFC 9562) made of what the variant is made of. */
function idOf(planId: string, inputsHash: string): string {
  const hex = createHash('sha256')
    .update(JSON.stringify(['variant', planId, inputsHash, ENGINE_VERSION]))
    .digest('hex')
  const bits = '89ab'[Number.parseInt(hex[16], 16) % 4]
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-8${hex.slice(13, 16)}-${bits}${hex.slice(17, 20)}-${hex.slice(20, 32)}`
}

interface Work {
  stop: AbortController
  done: Promise<void>
}

/** A desk that works variants out one after another in the compute threads and tells the day's stream how far they are. */
export function variantDesk(needs: Needs, failed: (error: unknown) => void): VariantDesk {
  const { store, compute, live } = needs
  const working = new Map<string, Work>()
  const bases = new Map<string, Promise<VariantBase>>()
  const closing = new AbortController()
  let turn: Promise<void> = Promise.resolve()

  const tell = ({ plan }: VariantsOrder, id: string, state: string, more: object = {}): void =>
    void live
      .publish(dayTopic(plan.raceId, plan.date), 'variant', { planId: plan.id, variantId: id, state, ...more })
      .catch((error: unknown) => failed(error))

  function baseOf({ plan, request }: VariantsOrder): Promise<VariantBase> {
    const known = bases.get(plan.id)
    if (known !== undefined) return known
    const made = compute.run('variant-base', { request }, closing.signal)
    bases.set(plan.id, made)
    made.catch(() => bases.delete(plan.id))
    const [oldest] = bases.keys()
    if (bases.size > MOST_BASES) bases.delete(oldest)
    return made
  }

  async function work(order: VariantsOrder, index: number, id: string, signal: AbortSignal): Promise<void> {
    if (signal.aborted) return
    const variant = order.variants[index]
    try {
      tell(order, id, 'working', { step: 'Planning the base', share: 0 })
      const base = await baseOf(order)
      const heard = (progress: object): void => tell(order, id, 'working', progress)
      const answer = await workVariant(needs, { request: order.request, variant, index }, base, signal, heard)
      if (await store.variants.finish(id, answer)) tell(order, id, 'done')
    } catch (error) {
      if (signal.aborted) return
      if (!(error instanceof Fault)) failed(error)
      const { code, message } =
        error instanceof Fault ? error : new Fault('internal', 'The variant could not be worked out.')
      await store.variants.fail(id, { code, detail: message })
      tell(order, id, 'failed', { code, detail: message })
    }
  }

  async function begin(order: VariantsOrder, index: number): Promise<string> {
    const { plan, variants } = order
    const variant = variants[index]
    const inputsHash = await compute.run('plan-hash', { plan: plan.inputsHash, variant })
    const id = idOf(plan.id, inputsHash)
    const { name } = variant
    const begun: NewVariant = { id, planId: plan.id, name, variant, inputsHash, engineVersion: ENGINE_VERSION }
    if (!(await store.variants.begin(begun))) return id
    const stop = new AbortController()
    tell(order, id, 'working', { step: 'Waiting its turn', share: 0 })
    turn = turn.then(() => work(order, index, id, stop.signal).catch(failed))
    const own = { stop, done: turn }
    working.set(id, own)
    void turn.then(() => working.get(id) === own && working.delete(id))
    return id
  }

  return {
    async order(order) {
      const ids: string[] = []
      for (const index of order.variants.keys()) ids.push(await begin(order, index))
      return ids
    },
    async cancel(id) {
      const variant = await store.variants.get(id)
      const was = await store.variants.cancel(id)
      working.get(id)?.stop.abort(new Error('the variant was cancelled'))
      const plan = variant === null ? null : await store.plans.get(variant.planId)
      if (was && plan !== null)
        void live
          .publish(dayTopic(plan.raceId, plan.date), 'variant', { planId: plan.id, variantId: id, state: 'cancelled' })
          .catch(failed)
      return was
    },
    async close() {
      const all = [...working]
      await Promise.all(all.map(([id]) => store.variants.cancel(id).catch(failed)))
      for (const [, { stop }] of all) stop.abort(new Error('the service is stopping'))
      closing.abort(new Error('the service is stopping'))
      await turn
    },
  }
}
