import { Fault } from '../errors.ts'
import type { Jobs, Progress } from './serve-jobs.ts'
import { type SlotOptions, type Task, workerSlot } from './slot.ts'

export interface PoolOptions extends Omit<SlotOptions, 'heapLimitMb'> {
  /** Workers. */
  size: number
  /** Most jobs that may wait for a worker. (default 64) */
  queueLimit?: number
  /** Largest heap of one worker. [MB] (default 1024) */
  heapLimitMb?: number
}

/** Threads that each do one job at a time: one job in, one answer out. */
export interface ComputePool<J extends Jobs> {
  /**
   * The job's answer.
   *
   * @param signal  takes the job back: out of the queue, or by ending the worker that does it
   * @param told    is told how far a long job is
   * @param parts   computations that the job is made of, each of which may take the time limit
   * @throws Fault 'busy', 'took-too-long', 'too-complex', 'compute-failed', 'stopping', or what the job itself refuses;
   *         the signal's reason when it was taken back
   */
  run<K extends string & keyof J>(
    kind: K,
    input: Parameters<J[K]>[0],
    signal?: AbortSignal,
    told?: (progress: Progress) => void,
    parts?: number,
  ): Promise<ReturnType<J[K]>>
  /** Whether a worker has loaded its code. */
  isReady(): boolean
  close(): Promise<void>
}

/** A pool whose workers fail with their own job only and are replaced. */
export function computePool<J extends Jobs>(options: PoolOptions): ComputePool<J> {
  const { size, queueLimit = 64, heapLimitMb = 1024 } = options
  const queue: Task[] = []
  const slots = Array.from({ length: size }, () => workerSlot({ ...options, heapLimitMb }, startWaiting))
  let isClosed = false

  function startWaiting(): void {
    for (let slot = free(); slot !== undefined; slot = free()) {
      const task = queue.shift()
      if (task === undefined) return
      slot.start(task)
    }
  }

  const free = () => slots.find((slot) => slot.isFree())

  function enqueue(task: Task): void {
    if (isClosed) return task.failed(new Fault('stopping', 'The service is stopping; try again in a moment.'))
    if (free() === undefined && queue.length >= queueLimit)
      return task.failed(new Fault('busy', `${queue.length} computations are waiting already; try again in a moment.`))
    queue.push(task)
    startWaiting()
  }

  function takeBack(task: Task, reason: Error): void {
    const place = queue.indexOf(task)
    if (place < 0) return slots.forEach((slot) => slot.giveUp(task, reason))
    queue.splice(place, 1)
    task.failed(reason)
  }

  return {
    run(kind, input, signal, told, parts = 1) {
      return new Promise((done, failed) => {
        const stop = () => takeBack(task, reasonOf(signal))
        const settled = () => signal?.removeEventListener('abort', stop)
        const task: Task = {
          message: { kind, input },
          told,
          parts,
          done(answer) {
            settled()
            done(answer)
          },
          failed(error) {
            settled()
            failed(error)
          },
        }
        if (signal?.aborted) return failed(reasonOf(signal))
        signal?.addEventListener('abort', stop, { once: true })
        enqueue(task)
      })
    },
    isReady: () => !isClosed && slots.some((slot) => slot.isReady()),
    async close() {
      isClosed = true
      for (const task of queue.splice(0)) task.failed(new Fault('stopping', 'The service is stopping.'))
      await Promise.all(slots.map((slot) => slot.close()))
    },
  }
}

const reasonOf = (signal: AbortSignal | undefined): Error =>
  signal?.reason instanceof Error ? signal.reason : new Error('The job was taken back.')
