import type { BridgeLimits } from './bridge.ts'
import type { Batch } from './wire.ts'

/** What the embedded engine's thread is started with. */
export interface WorkerTask {
  /** 'create' makes a database in an empty folder and ends; 'serve' opens one and answers. */
  task: 'create' | 'serve'
  folder: string
  /** Counters that both threads see, laid out as COUNTER says. */
  counters: SharedArrayBuffer
  limits: BridgeLimits
}

/** Places in the shared counters (32-bit integers). */
export const COUNTER = {
  /** Odd while the engine works on a batch; changes with every batch. */
  turn: 0,
  /** How long the batch at work may take. [ms] */
  limitMs: 1,
  /** Times that a file was forced to the disk. */
  syncs: 2,
} as const

/** To the engine's thread. */
export type ToWorker =
  | { type: 'batch'; client: number; batch: Batch }
  | { type: 'leave'; client: number }
  | { type: 'stop' }

/** From the engine's thread. */
export type FromWorker =
  | { type: 'ready' }
  | { type: 'failed'; message: string }
  | { type: 'answer'; client: number; bytes: Uint8Array; answered: number }
  | { type: 'left'; client: number }
