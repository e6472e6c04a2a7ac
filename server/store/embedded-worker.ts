import { parentPort, workerData } from 'node:worker_threads'
import { PGlite } from '@electric-sql/pglite'
import { bridge, type Bridge, type Session } from './bridge.ts'
import { errorMessage } from './store-error.ts'
import { SyncedFolder, syncTree } from './synced-folder.ts'
import { COUNTER, type FromWorker, type ToWorker, type WorkerTask } from './worker-messages.ts'

const MEMORY_BYTES = 128 * 1024 * 1024
const CHECKPOINT_EVERY_MS = 5 * 60_000
const CHECKPOINT_EVERY_BYTES = 16 * 1024 * 1024
const VACUUM_EVERY_MS = 60 * 60_000
const WORTH_A_VACUUM_BYTES = 256 * 1024
const TIDY_LIMIT_MS = 10 * 60_000

const task: WorkerTask = workerData
const counters = new Int32Array(task.counters)
const say = (message: FromWorker): void => parentPort?.postMessage(message, [])

const settings = ['shared_buffers=32MB', 'max_wal_size=64MB', 'min_wal_size=32MB', 'timezone=UTC', 'fsync=on']
const startParams = [
  ...PGlite.defaultStartParams.filter((parameter) => parameter !== '-F'),
  ...[...settings, 'wal_sync_method=fsync'].flatMap((setting) => ['-c', setting]),
]

/** What the engine itself last said of a fatal fault; its exceptions say little. */
let lastWords = ''
const hear = (line: string): boolean => {
  lastWords = /(?:FATAL|PANIC): +(.*)/.exec(line)?.[1] ?? lastWords
  return false
}

const open = (): Promise<PGlite> =>
  PGlite.create({
    fs: new SyncedFolder(task.folder, () => Atomics.add(counters, COUNTER.syncs, 1)),
    initialMemory: MEMORY_BYTES,
    startParams,
    onStderr: hear,
    onStdout: () => false,
  })

// How much the clients have sent: a cheap measure of how much they may have written.
let bytesSinceCheckpoint = 0
let bytesSinceVacuum = 0

function session(engine: PGlite): Session {
  return {
    async run(bytes, limitMs) {
      bytesSinceCheckpoint += bytes.length
      bytesSinceVacuum += bytes.length
      const parts: Buffer[] = []
      Atomics.store(counters, COUNTER.limitMs, limitMs)
      Atomics.add(counters, COUNTER.turn, 1)
      try {
        await engine.execProtocolRawStream(bytes, {
          syncToFs: false,
          onRawData: (part) => void parts.push(Buffer.from(part)),
        })
      } finally {
        Atomics.add(counters, COUNTER.turn, 1)
      }
      return parts.length === 1 ? parts[0] : Buffer.concat(parts)
    },
    isInTransaction: () => engine.isInTransaction(),
  }
}

async function checkpoint(shared: Bridge): Promise<void> {
  if (bytesSinceCheckpoint === 0) return
  bytesSinceCheckpoint = 0
  await shared.tidy('CHECKPOINT', TIDY_LIMIT_MS)
  bytesSinceCheckpoint = 0
}

async function vacuum(shared: Bridge): Promise<void> {
  if (bytesSinceVacuum < WORTH_A_VACUUM_BYTES) return
  bytesSinceVacuum = 0
  await shared.tidy('VACUUM ANALYZE', TIDY_LIMIT_MS)
}

/** The engine has neither checkpointer nor autovacuum: without these its log grows and its tables swell. */
function keepTidy(shared: Bridge): void {
  const checkLog = (): void => void (bytesSinceCheckpoint > CHECKPOINT_EVERY_BYTES && checkpoint(shared))
  setInterval(checkLog, 1000).unref()
  setInterval(() => void checkpoint(shared), CHECKPOINT_EVERY_MS).unref()
  setInterval(() => void vacuum(shared), VACUUM_EVERY_MS).unref()
}

async function stop(engine: PGlite, shared: Bridge): Promise<never> {
  await vacuum(shared)
  await checkpoint(shared)
  await engine.close()
  process.exit(0)
}

function serve(engine: PGlite): void {
  const shared = bridge(session(engine), task.limits, fail)
  const places = new Map<number, ReturnType<Bridge['join']>>()
  const enter = (client: number): ReturnType<Bridge['join']> => {
    const place = shared.join({
      answer: (bytes, answered) => say({ type: 'answer', client, bytes, answered }),
      left: () => say({ type: 'left', client }),
    })
    places.set(client, place)
    return place
  }
  parentPort?.on('message', (message: ToWorker) => {
    if (message.type === 'stop') return void stop(engine, shared)
    const place = places.get(message.client)
    if (message.type === 'batch') return (place ?? enter(message.client)).send(message.batch)
    places.delete(message.client)
    place?.leave()
  })
  keepTidy(shared)
  say({ type: 'ready' })
}

function fail(error: unknown): void {
  say({ type: 'failed', message: lastWords || errorMessage(error) })
  // Lets the message out before the thread ends.
  setTimeout(() => process.exit(1), 20)
}

try {
  const engine = await open()
  if (task.task === 'serve') {
    serve(engine)
  } else {
    await engine.close()
    syncTree(task.folder)
    say({ type: 'ready' })
  }
} catch (error) {
  fail(error)
}
