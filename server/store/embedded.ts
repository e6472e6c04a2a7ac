import type { Duplex } from 'node:stream'
import type { BridgeLimits } from './bridge.ts'
import { BridgeSocket } from './bridge-socket.ts'
import { databaseFolder, prepareFolder, unwritable } from './data-folder.ts'
import { createDatabase, type EngineSettings, type EngineThread, startEngine } from './engine-thread.ts'
import { lockFolder } from './folder-lock.ts'
import { errorCode, errorMessage, StoreError } from './store-error.ts'
import { COUNTER } from './worker-messages.ts'

// SQLSTATE. [PostgreSQL 15, appendix A]
const DISK_FULL = '53100'
const CANNOT_CONNECT_NOW = '57P03'

export interface EmbeddedOptions {
  dataDir: string
  /** The compiled embedded-worker.js. */
  workerUrl: URL
  limits: BridgeLimits
}

export interface Embedded {
  /** A connection for the client's `socket` option; starts the engine again when it has stopped. Never rejects. */
  socket: () => Promise<Duplex>
  /** Times that the engine forced a file to the disk since the start. */
  syncCount: () => number
  stop: () => Promise<void>
}

/**
 * Opens the embedded database of a data folder, making it first where there is none.
 *
 * @throws StoreError data-folder-in-use, -unwritable, -full or -unreadable
 */
export async function openEmbedded(options: EmbeddedOptions): Promise<Embedded> {
  const folder = prepareFolder(options.dataDir)
  const letGo = await lockFolder(folder).catch((error: unknown) => {
    throw error instanceof StoreError ? error : unwritable(folder, error)
  })
  try {
    const common = { ...options, counters: new SharedArrayBuffer(4 * Object.keys(COUNTER).length) }
    const path = await databaseFolder(folder, (aside) => createDatabase({ ...common, folder: aside }))
    return await serve({ ...common, folder: path }, letGo)
  } catch (error) {
    await letGo()
    const isDisk = ['EACCES', 'EPERM', 'EROFS', 'ENOSPC'].includes(errorCode(error))
    throw isDisk ? unwritable(folder, error) : error
  }
}

async function serve(settings: EngineSettings, letGo: () => Promise<void>): Promise<Embedded> {
  let isStopping = false
  let engine: Promise<EngineThread> | null = null

  const start = (): Promise<EngineThread> => {
    engine ??= startEngine(settings).then(
      (thread) => {
        void thread.ended.then(forget)
        return thread
      },
      (error: unknown) => {
        engine = null
        throw error
      },
    )
    return engine
  }
  const forget = (reason: string): void => {
    engine = null
    if (!isStopping) console.error(`Stagewatt: ${reason}; it starts again with the next request.`)
  }
  await start()

  const socket = async (): Promise<Duplex> => {
    try {
      if (isStopping) throw new Error('the embedded database is closed')
      return (await start()).connect()
    } catch (error) {
      return refusing(error)
    }
  }
  const stop = async (): Promise<void> => {
    isStopping = true
    await (await engine?.catch(() => null))?.stop()
    await letGo()
  }
  return { socket, syncCount: () => Atomics.load(new Int32Array(settings.counters), COUNTER.syncs), stop }
}

/** A connection that answers everything with the reason why there is none, by the code a server would give. */
function refusing(error: unknown): Duplex {
  const socket = new BridgeSocket(() => null)
  const isFull = errorCode(error) === 'data-folder-full'
  socket.stop(isFull ? DISK_FULL : CANNOT_CONNECT_NOW, errorMessage(error))
  return socket
}
