import { Worker } from 'node:worker_threads'
import type { BridgeLimits } from './bridge.ts'
import { BridgeSocket, type EngineLine } from './bridge-socket.ts'
import { unreadable } from './data-folder.ts'
import { COUNTER, type FromWorker, type ToWorker, type WorkerTask } from './worker-messages.ts'

export interface EngineThread {
  connect(): BridgeSocket
  /** Housekeeping, a clean end, and the thread is gone. */
  stop(): Promise<void>
  /** Resolves with the reason when the thread is gone, however it went. */
  ended: Promise<string>
}

export interface EngineSettings {
  workerUrl: URL
  folder: string
  limits: BridgeLimits
  counters: SharedArrayBuffer
}

const STOP_WITHIN_MS = 30_000
const WATCH_EVERY_MS = 100

const spawn = (settings: EngineSettings, task: WorkerTask['task']): Worker => {
  const { folder, limits, counters } = settings
  const workerData: WorkerTask = { task, folder, limits, counters }
  const worker = new Worker(settings.workerUrl, { workerData, execArgv: [], stdout: true, stderr: true })
  // The engine's own chatter is kept off the service's streams.
  worker.stdout.resume()
  worker.stderr.resume()
  return worker
}

/** Makes a database in an empty folder; resolves when it is whole and on the disk. */
export async function createDatabase(settings: EngineSettings): Promise<void> {
  const worker = spawn(settings, 'create')
  const ended = new Promise((resolve) => worker.once('exit', resolve))
  await readiness(worker, settings.folder)
  await ended
}

/** Starts the engine's thread; resolves when the database is open. */
export async function startEngine(settings: EngineSettings): Promise<EngineThread> {
  // A thread that was ended at work has left the turn odd.
  Atomics.store(new Int32Array(settings.counters), COUNTER.turn, 0)
  const worker = spawn(settings, 'serve')
  const sockets = new Map<number, BridgeSocket>()
  const say = (message: ToWorker): void => worker.postMessage(message, [])
  let reason = { code: '57P01', message: 'the embedded database stopped' }
  let isGone = false
  let count = 0

  worker.on('message', (message: FromWorker) => {
    if (message.type === 'answer') sockets.get(message.client)?.answer(message.bytes, message.answered)
    if (message.type === 'left') sockets.get(message.client)?.destroy()
    if (message.type === 'failed') reason = { code: '57P01', message: `${reason.message}: ${message.message}` }
  })
  const ended = new Promise<string>((resolve) => {
    worker.once('exit', () => {
      isGone = true
      for (const socket of sockets.values()) socket.stop(reason.code, reason.message)
      resolve(reason.message)
    })
  })
  await readiness(worker, settings.folder)

  const stopWatch = watch(settings.counters, (limitMs) => {
    reason = { code: '57014', message: `the embedded database gave up a statement after ${limitMs / 1000} s` }
    void worker.terminate()
  })
  void ended.then(stopWatch)

  const connect = (): BridgeSocket => {
    const client = ++count
    const line: EngineLine = {
      send: (batch) => say({ type: 'batch', client, batch }),
      leave: () => say({ type: 'leave', client }),
    }
    const socket = new BridgeSocket(() => (isGone ? null : line))
    sockets.set(client, socket)
    socket.once('close', () => sockets.delete(client))
    if (isGone) socket.stop(reason.code, reason.message)
    return socket
  }
  const stop = async (): Promise<void> => {
    const timer = setTimeout(() => void worker.terminate(), STOP_WITHIN_MS)
    say({ type: 'stop' })
    await ended
    clearTimeout(timer)
  }
  return { connect, stop, ended }
}

/** Resolves at the thread's 'ready', rejects with its own words when it ends before. */
function readiness(worker: Worker, folder: string): Promise<void> {
  return new Promise((resolve, reject) => {
    let reason = 'its thread ended'
    worker.on('message', (message: FromWorker) => {
      if (message.type === 'failed') reason = message.message
      if (message.type === 'ready') resolve()
    })
    worker.once('error', (error: Error) => {
      reason = error.message
    })
    worker.once('exit', () => reject(unreadable(folder, reason)))
  })
}

/**
 * Calls back when the engine works on one batch for longer than that batch may take: it has one thread
 * and no signals, so nothing inside can end a statement.
 *
 * @returns a function that ends the watch
 */
function watch(shared: SharedArrayBuffer, onOverdue: (limitMs: number) => void): () => void {
  const counters = new Int32Array(shared)
  let turn = 0
  let sinceMs = 0
  const timer = setInterval(() => {
    const now = Atomics.load(counters, COUNTER.turn)
    const limitMs = Atomics.load(counters, COUNTER.limitMs)
    const isNew = now !== turn
    if (isNew) sinceMs = performance.now()
    turn = now
    if (turn % 2 === 0 || isNew || performance.now() - sinceMs < limitMs) return
    clearInterval(timer)
    onOverdue(limitMs)
  }, WATCH_EVERY_MS)
  return () => clearInterval(timer)
}
