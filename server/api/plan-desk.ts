import { createHash } from 'node:crypto'
import { ENGINE_VERSION } from '../engine/version.ts'
import { Fault } from '../errors.ts'
import type { NewPlan, PlanStore } from '../store/plan-store.ts'
import type { Store } from '../store/store.ts'
import type { Needs } from './api.ts'

/** Everything that a plan is worked out from, with the ids that it is kept under. */
export interface PlanOrder {
  raceId: string
  date: string
  carId: string
  skyId: string
  /** Versions of the documents. */
  versions: unknown
  /** Target, spreads and the like. */
  wanted: object
  inputs: Record<string, unknown>
  /** Computations that it is made of; left out, one. */
  parts?: number
}

/** What a desk makes, and whom it tells. */
export interface PlanTrade {
  /** What is made; the name of its ids and events. */
  job: 'plan' | 'race-plan'
  /** The job that makes a plan as it is kept. */
  work: 'kept-plan' | 'kept-race-plan'
  kept: (store: Store) => PlanStore
  topic: (plan: NewPlan) => string
}

/** Plans being worked out by this service. */
export interface PlanDesk {
  /** Starts a plan, unless it is done or worked on already. @returns its id */
  order(order: PlanOrder): Promise<string>
  /** Takes a plan back that is being worked on. @returns whether it was */
  cancel(id: string): Promise<boolean>
  /** Ends when nothing is being worked on any more. */
  close(): Promise<void>
}

/** A UUID (version 8, RFC 9562) made of what the plan is made of, so that the same question is one plan. */
function idOf(job: string, { raceId, carId, skyId, versions }: PlanOrder, inputsHash: string): string {
  const parts = [job, raceId, carId, skyId, versions, inputsHash, ENGINE_VERSION]
  const hex = createHash('sha256').update(JSON.stringify(parts)).digest('hex')
  const variant = '89ab'[Number.parseInt(hex[16], 16) % 4]
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-8${hex.slice(13, 16)}-${variant}${hex.slice(17, 20)}-${hex.slice(20, 32)}`
}

/** A desk that works plans out in the compute threads and tells a stream how far they are. */
export function planDesk(
  { store, compute, live }: Needs,
  trade: PlanTrade,
  failed: (error: unknown) => void,
): PlanDesk {
  const { job, work: making } = trade
  const kept = trade.kept(store)
  const working = new Map<string, { stop: AbortController; done: Promise<void> }>()

  const tell = (plan: NewPlan, state: string, more: object = {}): void =>
    void live
      .publish(trade.topic(plan), job, { planId: plan.id, state, ...more })
      .catch((error: unknown) => failed(error))

  async function work(plan: NewPlan, { inputs, parts }: PlanOrder, signal: AbortSignal): Promise<void> {
    try {
      const told = (progress: object): void => tell(plan, 'working', progress)
      const { text, gist } = await compute.run(making, inputs, signal, told, parts)
      if (await kept.finish(plan.id, text, gist)) tell(plan, 'done')
    } catch (error) {
      if (signal.aborted) return
      if (!(error instanceof Fault)) failed(error)
      const { code, message } =
        error instanceof Fault ? error : new Fault('internal', 'The plan could not be worked out.')
      await kept.fail(plan.id, { code, detail: message })
      tell(plan, 'failed', { code, detail: message })
    }
  }

  return {
    async order(order) {
      const { raceId, date, carId, skyId, wanted, inputs } = order
      const inputsHash = await compute.run('plan-hash', inputs)
      const id = idOf(job, order, inputsHash)
      const plan: NewPlan = { id, raceId, date, carId, skyId, wanted, inputsHash, engineVersion: ENGINE_VERSION }
      if (!(await kept.begin(plan))) return id
      const stop = new AbortController()
      tell(plan, 'working', { step: 'Waiting its turn', share: 0 })
      const done = work(plan, order, stop.signal)
        .catch(failed)
        .finally(() => working.delete(id))
      working.set(id, { stop, done })
      return id
    },
    async cancel(id) {
      const plan = await kept.entry(id)
      const was = await kept.cancel(id)
      working.get(id)?.stop.abort(new Error('the plan was cancelled'))
      if (was && plan !== null) tell(plan, 'cancelled')
      return was
    },
    async close() {
      await Promise.all(
        [...working].map(async ([id, { stop, done }]) => {
          await kept.cancel(id).catch(failed)
          stop.abort(new Error('the service is stopping'))
          await done
        }),
      )
    },
  }
}
