import { Worker } from 'node:worker_threads'
import { Fault } from '../errors.ts'
import type { Progress, Reply } from './serve-jobs.ts'

export interface Task {
  message: { kind: string; input: unknown }
  done(answer: never): void
  failed(error: Error): void
  /** Told whenever the job says how far it is. */
  told?(progress: Progress): void
  /** Computations that it is made of, each of which may take the time limit. */
  parts: number
}

export interface SlotOptions {
  /** The compiled worker. */
  workerUrl: URL
  /** Longest time that a job of one part may run. [ms] */
  timeLimitMs: number
  /** Largest heap of the worker. [MB] */
  heapLimitMb: number
}

/** Place of one worker thread, which does one task at a time and is replaced when it is gone. */
export interface Slot {
  isFree(): boolean
  /** Whether the worker has loaded its code. */
  isReady(): boolean
  start(task: Task): void
  /** Fails the task at once, if this slot does it, and ends its worker. */
  giveUp(task: Task, reason: Error): void
  close(): Promise<void>
}

/**
 * A slot with its worker already loading.
 *
 * @param onFree  called when the slot can take a task again
 */
export function workerSlot(options: SlotOptions, onFree: () => void): Slot {
  let worker: Worker | null = null
  let isLoaded = false
  let isEnding = false
  let current: { task: Task; limit: NodeJS.Timeout } | null = null
  let lastError: Error | null = null
  let isClosed = false

  function spawn(): Worker {
    const thread = new Worker(options.workerUrl, { resourceLimits: { maxOldGenerationSizeMb: options.heapLimitMb } })
    thread.on('message', settle)
    thread.on('error', (error) => {
      lastError = error instanceof Error ? error : new Error(String(error))
    })
    thread.on('exit', gone)
    worker = thread
    return thread
  }

  function settle(reply: Reply): void {
    if (reply.kind === 'loaded') {
      isLoaded = true
      return
    }
    if (reply.kind === 'progress') {
      current?.task.told?.(reply.progress)
      return
    }
    const task = take()
    if (reply.kind === 'answer') task?.done(reply.answer)
    else if (reply.kind === 'fault') task?.failed(new Fault(reply.code, reply.detail, { errors: reply.errors }))
    else task?.failed(crashed(reply.stack))
    if (!isEnding) onFree()
  }

  function take(): Task | null {
    clearTimeout(current?.limit)
    const task = current?.task ?? null
    current = null
    return task
  }

  // A worker that never loaded is replaced with the next task only, or a missing file would spin the slot.
  function gone(): void {
    const wasLoaded = isLoaded
    const fault = isOutOfMemory(lastError) ? tooComplex() : crashed(lastError ?? 'the worker ended by itself')
    worker = null
    isLoaded = false
    lastError = null
    take()?.failed(fault)
    if (isClosed) return
    isEnding = false
    if (wasLoaded) spawn()
    onFree()
  }

  function end(): Promise<unknown> {
    isEnding = true
    return worker?.terminate() ?? Promise.resolve()
  }

  const giveUp = (task: Task, reason: Error): void => {
    if (current?.task !== task) return
    take()?.failed(reason)
    void end()
  }
  spawn()
  return {
    isFree: () => current === null && !isEnding && !isClosed,
    isReady: () => isLoaded && !isEnding,
    start(task) {
      const limitMs = options.timeLimitMs * task.parts
      const limit = setTimeout(() => giveUp(task, tookTooLong(limitMs)), limitMs)
      current = { task, limit }
      const thread = worker ?? spawn()
      thread.postMessage(task.message, [])
    },
    giveUp,
    async close() {
      isClosed = true
      take()?.failed(new Fault('stopping', 'The service is stopping; try again in a moment.'))
      await end()
    },
  }
}

const isOutOfMemory = (error: Error | null): boolean =>
  error !== null && 'code' in error && error.code === 'ERR_WORKER_OUT_OF_MEMORY'

const crashed = (cause: unknown): Fault =>
  new Fault('compute-failed', 'The computation stopped unexpectedly; the service has written down why.', { cause })

const tooComplex = (): Fault =>
  new Fault('too-complex', 'Working on this body needed more memory than one computation may take.')

const tookTooLong = (limitMs: number): Fault =>
  new Fault('took-too-long', `The computation was stopped after ${limitMs / 1000} s.`)
