import { parentPort } from 'node:worker_threads'
import type { Problem } from '../documents/problem.ts'
import { type ErrorCode, Fault } from '../errors.ts'

/**
 * What a worker sends: that it has loaded, an answer, what the job refuses, or an unexpected error.
 * The receiver takes the answer as `never`: only whoever asked knows its type.
 */
export type Reply<Answer = never> =
  | { kind: 'loaded' }
  | { kind: 'answer'; answer: Answer }
  | { kind: 'fault'; code: ErrorCode; detail: string; errors: Problem[] }
  | { kind: 'crash'; stack: string }

/** The work of each kind: its input and its answer are copied between threads. */
export type Jobs = { [kind: string]: (input: never) => unknown }

/** Lets this worker thread do the jobs, one after another. */
export function serveJobs(jobs: Jobs): void {
  parentPort?.on('message', ({ kind, input }: { kind: string; input: never }) => {
    const reply = outcome(() => jobs[kind](input))
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
