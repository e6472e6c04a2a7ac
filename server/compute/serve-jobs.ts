import { constants, getPriority, setPriority } from 'node:os'
import { parentPort } from 'node:worker_threads'
import type { Problem } from '../documents/problem.ts'
import { type ErrorCode, Fault } from '../errors.ts'

/**
 * What a worker sends: that it has loaded, an answer, what the job refuses, or an unexpected error.
 * The receiver takes the answer as `never`: only whoever asked knows its type.
 */
export type Reply<Answer = never> =
  | { kind: 'loaded' }
  | { kind: 'progress'; progress: Progress }
  | { kind: 'answer'; answer: Answer }
  | { kind: 'fault'; code: ErrorCode; detail: string; errors: Problem[] }
  | { kind: 'crash'; stack: string }

/** How far a job is, in words for people and as a share. */
export interface Progress {
  step: string
  /** 0..1 */
  share: number
}

/** The work of each kind: its input and its answer are copied between threads; long work may tell how far it is. */
export type Jobs = { [kind: string]: (input: never, tell: (progress: Progress) => void) => unknown }

/** Behind the event loop, which shares the cores and must answer at once. [nice] */
const BEHIND = 10

/** Linux ranks each thread by itself; elsewhere this would hold back the event loop as well. */
function stepBack(): void {
  if (process.platform !== 'linux') return
  try {
    setPriority(Math.min(getPriority() + BEHIND, constants.priority.PRIORITY_LOW))
  } catch {
    // A container that forbids it works on at the same rank.
  }
}

/** Lets this worker thread do the jobs, one after another. */
export function serveJobs(jobs: Jobs): void {
  stepBack()
  parentPort?.on('message', ({ kind, input }: { kind: string; input: never }) => {
    const tell = (progress: Progress): void =>
      parentPort?.postMessage({ kind: 'progress', progress } satisfies Reply, [])
    const reply = outcome(() => jobs[kind](input, tell))
    parentPort?.postMessage(reply, [])
  })
  parentPort?.postMessage({ kind: 'loaded' } satisfies Reply, [])
}

function outcome(work: () => unknown): Reply<unknown> {
  try {
    return { kind: 'answer', answer: work() }
  } catch (error) {
    if (error instanceof Fault) return { kind: 'fault', code: error.code, detail: error.message, errors: error.errors }
    return { kind: 'crash', stack: error instanceof Error ? (error.stack ?? error.message) : String(error) }
  }
}
