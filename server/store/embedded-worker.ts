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
const TIDY_LIMIT_MS = 10 * 60_000

const task: WorkerTask = workerData
const counters = new Int32Array(task.counters)
const say = (message: FromWorker): void => parentPort?.postMessage(message, [])

const settings = ['shared_buffers=32MB', 'max_wal_size=64MB', 'min_wal_size=32MB', 'timezone=UTC', 'fsync=on']
const startParams = [
  ...PGlite.defaultStartParams.filter((parameter) => parameter !== '-F'),
  ...[...settings, 'wal_sync_method=fsync'].flatMap((setting) => ['-c', setting]),
]

const open = (): Promise<PGlite> =>
  PGlite.create({
    fs: new SyncedFolder(task.folder, () => Atomics.add(counters, COUNTER.syncs, 1)),
    initialMemory: MEMORY_BYTES,
    startParams,
  })

let bytesSinceCheckpoint = 0

function session(engine: PGlite): Session {
  return {
    async run(bytes, limitMs) {
      bytesSinceCheckpoint += bytes.length
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

/** The engine has neither checkpointer nor autovacuum: without these its log grows and its tables swell. */
function keepTidy(shared: Bridge): void {
  let hasWork = false
  let isBusy = false
  const checkpoint = async (): Promise<void> => {
    if (isBusy || bytesSinceCheckpoint === 0) return
    isBusy = true
    await shared.tidy('CHECKPOINT', TIDY_LIMIT_MS)
    bytesSinceCheckpoint = 0
    hasWork = true
    isBusy = false
  }
  const vacuum = async (): Promise<void> => {
    if (!hasWork) return
    await shared.tidy('VACUUM ANALYZE', TIDY_LIMIT_MS)
    hasWork = false
  }
  setInterval(() => void checkpoint(), CHECKPOINT_EVERY_MS).unref()
  setInterval(() => void (bytesSinceCheckpoint > CHECKPOINT_EVERY_BYTES && checkpoint()), 1000).unref()
  setInterval(() => void vacuum(), VACUUM_EVERY_MS).unref()
}

async function stop(engine: PGlite, shared: Bridge): Promise<never> {
  if (bytesSinceCheckpoint > 0) {
    await shared.tidy('VACUUM ANALYZE', TIDY_LIMIT_MS)
    await shared.tidy('CHECKPOINT', TIDY_LIMIT_MS)
  }
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
  say({ type: 'failed', message: errorMessage(error) })
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
