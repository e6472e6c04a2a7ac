import { closeSync, fsyncSync, openSync, readdirSync } from 'node:fs'
import { join } from 'node:path'
import type { PGlite } from '@electric-sql/pglite'
import { NodeFS } from '@electric-sql/pglite/nodefs'

type EngineOptions = Parameters<NodeFS['init']>[1]
type EngineModule = Parameters<NonNullable<EngineOptions['preRun']>[number]>[0]

/** The parts of Emscripten's file system that are used here. */
interface NodeFileSystem {
  stream_ops: { fsync?: (stream: { nfd?: number; node?: unknown }) => number }
  realPath(node: unknown): string
}

const isNodeFileSystem = (value: unknown): value is NodeFileSystem =>
  typeof value === 'object' && value !== null && 'stream_ops' in value && 'realPath' in value

/**
 * A data folder on the machine's disk whose fsync reaches the disk; PGlite's own does nothing.
 *
 * @param onSync  called each time a file or folder was forced to the disk
 */
export class SyncedFolder extends NodeFS {
  readonly #onSync: () => void

  constructor(folder: string, onSync: () => void) {
    super(folder)
    this.#onSync = onSync
  }

  override init(pg: PGlite, options: EngineOptions): ReturnType<NodeFS['init']> {
    const hook = (module: EngineModule): void => {
      const disk: unknown = module.NODEFS
      if (!isNodeFileSystem(disk)) throw new Error('this version of PGlite has another file system')
      disk.stream_ops.fsync = (stream) => {
        if (stream.nfd !== undefined) fsyncSync(stream.nfd)
        else if (stream.node !== undefined) syncFolder(disk.realPath(stream.node))
        this.#onSync()
        return 0
      }
    }
    return super.init(pg, { ...options, preRun: [...(options.preRun ?? []), hook] })
  }
}

/** Forces a whole tree of files and folders to the disk. */
export function syncTree(folder: string): void {
  for (const entry of readdirSync(folder, { withFileTypes: true })) {
    const path = join(folder, entry.name)
    if (entry.isDirectory()) syncTree(path)
    else if (entry.isFile()) syncFile(path)
  }
  syncFolder(folder)
}

function syncFile(path: string): void {
  const descriptor = openSync(path, 'r+')
  try {
    fsyncSync(descriptor)
  } finally {
    closeSync(descriptor)
  }
}

/** Forces a folder's entries to the disk, where the operating system lets folders be opened. */
export function syncFolder(path: string): void {
  if (process.platform === 'win32') return
  const descriptor = openSync(path, 'r')
  try {
    fsyncSync(descriptor)
  } finally {
    closeSync(descriptor)
  }
}
